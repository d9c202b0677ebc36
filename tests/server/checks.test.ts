import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { can } from '$lib/access/access';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';
import type { CheckReference } from '$lib/server/services/checks.service';
import { assessmentsRepository } from '$lib/server/repositories/assessments.repository';
import { scopeOf } from '$lib/server/repositories/scope';
import { storePublishedLimitSet } from '$lib/server/repositories/published-limit-sets';
import { limitSet } from '../limits/load-limit-files';
import { NOW, openWorld, practiceWithOwner, type World } from '../support/practice-world';
import { confirmAsSuggested, onlyCapture, surveyAtPoint, upload, workOff } from './captures-world';

let world: World;
let owner: Actor;
beforeEach(async () => {
	world = await openWorld();
	await storePublishedLimitSet(world.db, limitSet('ieee-519-2022'), new Date(NOW));
	owner = await practiceWithOwner(world.db, 'Halden');
});
afterEach(() => world.close());

/** Four seconds at a point of 277 V; the second voltage lead sits on the first conductor. */
function captureWithMisplacedLead() {
	const channels = threePhaseChannels({
		voltage_V: 277,
		voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 2, phase_deg: 0 }],
		current_A: 400,
		currentHarmonics: [{ order: 5, magnitude_pctOfFundamental: 3, phase_deg: 180 }],
		lag_deg: 20
	});
	channels[1] = { ...channels[0]!, name: 'U2', phase: 'L2' };
	const recording = synthesiseRecording(
		{ frequency_Hz: 60, samplingRate_Hz: 7680, duration_s: 4, seed: 3, channels },
		{ nominalFrequency_Hz: 60 }
	);
	const start = { local: '2026-03-10T15:05:00.000000', utcOffset_min: null };
	return writeComtrade(
		{ ...recording, start },
		{ revision: '1999', dataFormat: 'BINARY', stem: 'misplaced' }
	);
}

async function analysed(): Promise<{ surveyId: string; captureId: string }> {
	const { surveyId } = await surveyAtPoint(world.db, owner);
	await upload(world.container, owner, surveyId, captureWithMisplacedLead());
	await workOff(world.container);
	const captureId = await onlyCapture(world.db, surveyId);
	await confirmAsSuggested(world.container, owner, surveyId, captureId);
	await workOff(world.container);
	return { surveyId, captureId };
}

async function blocking(surveyId: string): Promise<CheckReference[]> {
	const checks = await world.container.services.checks.ofSurvey(owner, surveyId);
	return checks.captures
		.flatMap((one) => one.checks)
		.filter(({ check, overrule }) => check.outcome === 'blocks' && overrule === null)
		.map(({ captureId, check: { code, channelIndex, sentence } }) => ({
			captureId,
			code,
			channelIndex,
			sentence
		}));
}

async function current(surveyId: string) {
	return (await assessmentsRepository(world.db, scopeOf(owner)).currentOf(surveyId))!;
}

const REASON = 'The second lead was on the first conductor; the client wants the figures shown.';

describe('a capture with a voltage lead on the wrong conductor', () => {
	it('gives no verdict on that phase until it is overruled, and again none once that is taken back', async () => {
		const { surveyId } = await analysed();
		const { checks } = world.container.services;
		const found = await blocking(surveyId);
		expect(found.map(({ code, channelIndex }) => [code, channelIndex])).toEqual([['same-signal', 1]]);
		const onL2 = async () =>
			(await current(surveyId)).assessment.rows.filter(
				({ quantity, phase }) => quantity === 'voltage' && phase === 'L2'
			);
		const before = await onL2();
		expect(before.length).toBeGreaterThan(0);
		expect(before.every(({ verdict, value_pct }) => verdict === 'not-assessed' && value_pct === null)).toBe(
			true
		);
		expect(before[0]!.reason).toContain(found[0]!.sentence);
		const others = (await current(surveyId)).assessment.rows.filter(
			({ quantity, phase }) => quantity === 'voltage' && phase === 'L1'
		);
		expect(others.some(({ verdict }) => verdict !== 'not-assessed')).toBe(true);
		expect((await current(surveyId)).assessment.verdict).toBe('not-assessed');

		for (const reference of found) await checks.overrule(owner, surveyId, reference, REASON);
		await workOff(world.container);
		expect((await onL2()).some(({ reason }) => reason.includes(found[0]!.sentence))).toBe(false);
		const kept = (await current(surveyId)).input.checks!.find(
			({ sentence }) => sentence === found[0]!.sentence
		);
		expect(kept!.overrule).toMatchObject({ reason: REASON, by: owner.name });

		const overrules = await world.db('check_overrules').where({ survey_id: surveyId });
		for (const { id } of overrules) await checks.takeBack(owner, surveyId, id);
		await workOff(world.container);
		expect((await onL2()).every(({ verdict }) => verdict === 'not-assessed')).toBe(true);
		expect(await world.db('check_overrules').where({ survey_id: surveyId })).toHaveLength(1);
		const audit = await world.db('audit_events').where('action', 'like', 'check.%').orderBy('id');
		expect(audit.map(({ action }) => action)).toEqual(['check.overruled', 'check.overrule-taken-back']);
	});

	it('takes no reason that tells nothing, no second word, and no word against another finding', async () => {
		const { surveyId } = await analysed();
		const { checks } = world.container.services;
		const [first] = await blocking(surveyId);
		await expect(checks.overrule(owner, surveyId, first!, 'it is fine    ')).rejects.toMatchObject({
			code: 'invalid'
		});
		await expect(
			checks.overrule(owner, surveyId, { ...first!, sentence: 'Something else.' }, REASON)
		).rejects.toMatchObject({ code: 'conflict' });
		await checks.overrule(owner, surveyId, first!, REASON);
		await expect(checks.overrule(owner, surveyId, first!, REASON)).rejects.toMatchObject({
			code: 'conflict'
		});
		const stranger = await practiceWithOwner(world.db, 'Other');
		await expect(checks.ofSurvey(stranger, surveyId)).rejects.toMatchObject({ code: 'not-found' });
		await expect(
			checks.overrule({ ...owner, role: 'client', clientId: 'x' }, surveyId, first!, REASON)
		).rejects.toMatchObject({ code: 'forbidden' });
		expect(can({ role: 'engineer' }, 'capture.write')).toBe(true);
	});
});
