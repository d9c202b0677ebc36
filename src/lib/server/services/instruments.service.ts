import type { Actor } from '../../access/access';
import type { InstrumentFacts } from '../../register/instrument-facts';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import {
	listInstruments,
	loadInstrumentPage,
	toInstrumentFacts,
	type InstrumentListQuery
} from '../read-models/instrument-list';
import { instrumentsRepository } from '../repositories/instruments.repository';
import { scopeOf } from '../repositories/scope';
import { sensorsRepository } from '../repositories/sensors.repository';
import type { ServiceDeps } from '../service-deps';
import { queueReassessment } from './assessments/queue-reassessment';

/** A sensor of another practice is as good as none. */
async function requireOwnSensors(trx: Db, actor: Actor, { inputs }: InstrumentFacts): Promise<void> {
	const wanted = new Set(inputs.flatMap((input) => input.sensorId ?? []));
	const found = await sensorsRepository(trx, scopeOf(actor)).byIds([...wanted]);
	if (found.length !== wanted.size)
		throw new AppError(
			'invalid',
			'A sensor chosen at an input is no longer in the register. Choose it again from the list.'
		);
}

/** Instruments of the practice, their inputs, and what they were used for. */
export function createInstrumentsService({ db, clock, jobs }: ServiceDeps) {
	const today = () => clock().toISOString().slice(0, 10);

	return {
		async list(actor: Actor, query: InstrumentListQuery) {
			requirePermission(actor, 'register.read');
			return listInstruments(db, scopeOf(actor), query, today());
		},

		async page(actor: Actor, instrumentId: string) {
			requirePermission(actor, 'register.read');
			return requireFound(await loadInstrumentPage(db, scopeOf(actor), instrumentId, today()), 'instrument');
		},

		async create(actor: Actor, facts: InstrumentFacts): Promise<string> {
			requirePermission(actor, 'register.write');
			const now = clock();
			return withTransaction(db, async (trx) => {
				await requireOwnSensors(trx, actor, facts);
				const id = await instrumentsRepository(trx, scopeOf(actor)).add(facts, now.toISOString());
				await appendAudit(
					trx,
					actor,
					{
						action: 'instrument.created',
						subjectKind: 'instrument',
						subjectId: id,
						detail: { name: facts.name, serialNumber: facts.serialNumber }
					},
					now
				);
				return id;
			});
		},

		/** Accuracy goes into the uncertainty of verdicts: the audit keeps both states. */
		async update(actor: Actor, instrumentId: string, facts: InstrumentFacts): Promise<void> {
			requirePermission(actor, 'register.write');
			await withTransaction(db, async (trx) => {
				const instruments = instrumentsRepository(trx, scopeOf(actor));
				const before = requireFound(await instruments.byId(instrumentId), 'instrument');
				const inputsBefore = await instruments.inputs([instrumentId]);
				await requireOwnSensors(trx, actor, facts);
				await instruments.update(instrumentId, facts);
				await queueReassessment(trx, jobs, actor.practiceId, { instrumentId });
				await appendAudit(
					trx,
					actor,
					{
						action: 'instrument.changed',
						subjectKind: 'instrument',
						subjectId: instrumentId,
						detail: { before: toInstrumentFacts(before, inputsBefore), after: facts }
					},
					clock()
				);
			});
		},

		async setArchived(actor: Actor, instrumentId: string, archived: boolean): Promise<void> {
			requirePermission(actor, 'register.write');
			const now = clock();
			await withTransaction(db, async (trx) => {
				const instruments = instrumentsRepository(trx, scopeOf(actor));
				const instrument = requireFound(await instruments.byId(instrumentId), 'instrument');
				await instruments.setArchived(instrumentId, archived ? now.toISOString() : null);
				await appendAudit(
					trx,
					actor,
					{
						action: archived ? 'instrument.archived' : 'instrument.restored',
						subjectKind: 'instrument',
						subjectId: instrumentId,
						detail: { name: instrument.name }
					},
					now
				);
			});
		}
	};
}
