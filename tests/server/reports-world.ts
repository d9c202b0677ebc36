import type { Actor } from '$lib/access/access';
import { storePublishedLimitSet } from '$lib/server/repositories/published-limit-sets';
import { limitSet } from '../limits/load-limit-files';
import { NOW, openWorld, personOf, practiceWithOwner, type World } from '../support/practice-world';
import {
	comtradeCapture,
	confirmAsSuggested,
	onlyCapture,
	surveyAtPoint,
	upload,
	workOff
} from './captures-world';

export interface ReportsWorld extends World {
	owner: Actor;
	engineer: Actor;
	checker: Actor;
	client: Actor;
	neighbour: Actor;
	stranger: Actor;
	surveyId: string;
	pointId: string;
}

/** A practice with an engineer, a checker and a client, and a survey judged on a real COMTRADE capture. */
export async function openReportsWorld(): Promise<ReportsWorld> {
	const world = await openWorld();
	const { db, container } = world;
	await storePublishedLimitSet(db, limitSet('ieee-519-2022'), new Date(NOW));
	await storePublishedLimitSet(db, limitSet('en-50160-2022'), new Date(NOW));
	const owner = await practiceWithOwner(db, 'Tarn');
	const person = (name: string, role: Actor['role'], clientId: string | null) =>
		personOf(db, owner.practiceId, 'Tarn', name, role, clientId);
	const engineer = await person('Mia Adeyemi', 'engineer', null);
	const checker = await person('Jo Holloway', 'checker', null);
	const { surveyId, clientId, pointId } = await surveyAtPoint(db, engineer, {
		demand_json: '{"method":"entered","demandCurrent_A":800,"source":"meter"}',
		short_circuit_json: '{"method":"current","shortCircuitCurrent_A":25000,"source":"utility letter"}'
	});
	const other = await surveyAtPoint(db, engineer);
	const client = await person('Rita Castellane', 'client', clientId);
	const neighbour = await person('Ola Fern', 'client', other.clientId);
	const stranger = await practiceWithOwner(db, 'Birch');
	await upload(container, engineer, surveyId, comtradeCapture(4));
	await workOff(container);
	await confirmAsSuggested(container, engineer, surveyId, await onlyCapture(db, surveyId));
	await workOff(container);
	return { ...world, owner, engineer, checker, client, neighbour, stranger, surveyId, pointId };
}

/** A draft, sent for check. */
export async function reportInCheck(world: ReportsWorld, author: Actor = world.engineer): Promise<string> {
	const { reports } = world.container.services;
	const revisionId = await reports.createDraft(author, world.surveyId);
	await reports.sendForCheck(author, revisionId);
	return revisionId;
}

export async function issued(world: ReportsWorld): Promise<string> {
	const revisionId = await reportInCheck(world);
	await world.container.services.reports.issue(world.checker, revisionId);
	await workOff(world.container);
	return revisionId;
}
