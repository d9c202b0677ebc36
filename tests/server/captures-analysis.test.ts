import { existsSync, readFileSync } from 'node:fs';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { seriesForSurvey } from '$lib/server/analysis/survey-series';
import { newId } from '$lib/server/db/ids';
import { scopeOf } from '$lib/server/repositories/scope';
import { openWorld, practiceWithOwner, type World } from '../support/practice-world';
import {
	comtradeCapture,
	confirmAsSuggested,
	onlyCapture,
	surveyAtPoint,
	upload,
	workOff
} from './captures-world';

let world: World;
let owner: Actor;
beforeAll(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Tarn');
});
afterAll(() => world.close());

const ASKED = { view: 'spectrum', quantity: 'current', window: null, order: 5, interval: null } as const;

async function analysed(files: Parameters<typeof upload>[3], point = {}) {
	const { surveyId } = await surveyAtPoint(world.db, owner, point);
	await upload(world.container, owner, surveyId, files);
	await workOff(world.container);
	const captureId = await onlyCapture(world.db, surveyId);
	await confirmAsSuggested(world.container, owner, surveyId, captureId);
	await workOff(world.container);
	return { surveyId, captureId };
}

describe('an analysed capture', () => {
	it('gives back the levels it was made of, TDD on demand current beside THD', async () => {
		const { surveyId, captureId } = await analysed(comtradeCapture(4));
		const page = await world.container.services.readings.page(owner, surveyId, captureId, ASKED);
		const detail = page.readings!.detail;
		if (detail.kind !== 'waveform') throw new Error('a waveform was uploaded');
		const current = detail.channels.find(
			(channel) => channel.quantity === 'current' && channel.phase === 'L1'
		)!;
		// 16-bit steps over the channel's range: 0.02 % of 400 A is twice what quantising the samples can do.
		expect(Math.abs(current.fundamental! / 400 - 1)).toBeLessThan(2e-4);
		// √(25² + 9²) % of the fundamental; I_L is twice the fundamental, so the TDD is half of that (definition of both).
		expect(current.thd_pctOfFundamental).toBeCloseTo(Math.hypot(25, 9), 1);
		expect(current.tdd_pctOfDemandCurrent).toBeCloseTo(Math.hypot(25, 9) / 2, 1);
		const fifth = detail.orders.find((row) => row.order === 5)!;
		expect(fifth.phases[0]!.magnitude).toBeCloseTo(100, 1);
		expect(page.readings!.intervalKinds).toEqual(expect.arrayContaining(['window', '3s']));
		expect(page.readings!.basis.basis).toBe('demand-current');
	});

	it('shows one window by its own figures and its place in time', async () => {
		const { surveyId, captureId } = await analysed(comtradeCapture(2));
		const page = await world.container.services.readings.page(owner, surveyId, captureId, {
			...ASKED,
			window: 3
		});
		const detail = page.readings!.detail;
		if (detail.kind !== 'waveform') throw new Error('a waveform was uploaded');
		expect(detail.window).toBe(3);
		expect(detail.place!.to_s - detail.place!.from_s).toBeCloseTo(12 / 60.02, 4);
		expect(detail.place!.start_ms).toBeCloseTo(
			Date.parse('2026-03-10T19:05:00.250Z') + 1000 * detail.place!.from_s,
			3
		);
	});

	it('serves its samples in primary values', async () => {
		const { captureId } = await analysed(comtradeCapture(1));
		const slice = await world.container.services.readings.waveform(owner, captureId, {
			from_s: 0,
			to_s: 1,
			points: 20_000
		});
		expect(slice.channels).toHaveLength(7);
		const voltages = slice.channels[0]!.points.filter((_, i) => i % 2 === 1) as number[];
		expect(Math.max(...voltages)).toBeGreaterThan(277 * Math.SQRT2 * 0.97);
		expect(voltages).toHaveLength(7680);
	});

	it('is analysed again with the new factors, and only the newest analysis counts', async () => {
		const { surveyId, captureId } = await analysed(comtradeCapture(1));
		const { captures } = world.container.services;
		const { capture } = await captures.detail(owner, surveyId, captureId);
		if (capture.settings?.kind !== 'waveform') throw new Error('a waveform was uploaded');
		await captures.confirm(owner, surveyId, captureId, {
			settings: {
				kind: 'waveform',
				channels: capture.settings.channels.map((channel) =>
					channel.quantity === 'current' ? { ...channel, toPrimary: -10 } : channel
				)
			},
			startedAt: new Date(capture.startedAt!)
		});
		await workOff(world.container);
		const rows = await world.db('analyses').where({ capture_id: captureId }).orderBy('created_at');
		expect(rows.map((row) => row.is_current).sort()).toEqual([0, 1]);
		const gathered = await seriesForSurvey(world.db, scopeOf(owner), surveyId);
		const current = gathered.series.find(
			(s) => s.quantity === 'current' && s.phase === 'L1' && s.interval === 'window'
		)!;
		expect(current.rms[0]! / 4000).toBeGreaterThan(1);
		expect(gathered.analysisIds).toEqual(rows.filter((row) => row.is_current === 1).map((row) => row.id));
	});

	it('is judged without being asked: an assessment follows', async () => {
		const { surveyId } = await analysed(comtradeCapture(1));
		const jobs = await world
			.db('jobs')
			.where({ kind: 'assess-survey' })
			.whereRaw(`json_extract(payload_json, '$.surveyId') = ?`, [surveyId]);
		expect(jobs).toMatchObject([{ status: 'done' }]);
	});

	it('leaves the survey when it is removed', async () => {
		const { surveyId, captureId } = await analysed(comtradeCapture(1));
		await reportOn(surveyId, captureId, 'draft');
		const { captures } = world.container.services;
		await captures.remove(owner, surveyId, captureId);
		await expect(captures.detail(owner, surveyId, captureId)).rejects.toMatchObject({ code: 'not-found' });
		expect((await seriesForSurvey(world.db, scopeOf(owner), surveyId)).series).toEqual([]);
		expect(await world.db('capture_files').where({ capture_id: captureId })).toHaveLength(2);
	});

	it('stays when an issued report rests on it', async () => {
		const { surveyId, captureId } = await analysed(comtradeCapture(1));
		await reportOn(surveyId, captureId, 'issued');
		await expect(world.container.services.captures.remove(owner, surveyId, captureId)).rejects.toMatchObject({
			code: 'conflict',
			message: expect.stringContaining('issued report')
		});
	});
});

/** A report revision on an assessment that names the capture, written straight into the tables. */
async function reportOn(surveyId: string, captureId: string, status: 'draft' | 'issued') {
	const { db } = world;
	const stamp = { created_at: '2026-03-19T09:30:00.000Z' };
	const survey = (await db('surveys').where({ id: surveyId }).first())!;
	const own = { practice_id: owner.practiceId, client_id: survey.client_id };
	const ids = { assessment: newId(), report: newId(), revision: newId() };
	const [limitSetId] = await db('limit_sets').insert({
		key: `own-${surveyId}`,
		standard: 'Own',
		edition: '1',
		title: 'Own',
		publisher: '',
		jurisdiction: '',
		status: 'current',
		notes_json: '[]',
		source_sha256: '',
		...stamp
	});
	await db('assessments').insert({
		id: ids.assessment,
		...own,
		survey_id: surveyId,
		limit_set_id: limitSetId!,
		verdict: 'exceeds',
		evidence: 'snapshot',
		advisory: 0,
		engine_version: '1',
		input_json: JSON.stringify({ captures: [{ id: captureId }] }),
		result_json: '{}',
		is_current: 0,
		...stamp
	});
	await db('reports').insert({
		id: ids.report,
		...own,
		site_id: survey.site_id,
		survey_id: surveyId,
		title: 'Report',
		created_by: owner.userId,
		...stamp
	});
	await db('report_revisions').insert({
		id: ids.revision,
		...own,
		report_id: ids.report,
		revision: 'A',
		status,
		assessment_id: ids.assessment,
		findings_json: '[]',
		prepared_by: owner.userId,
		updated_at: stamp.created_at,
		...stamp
	});
}

const SAMPLES = new URL('../../../shared/samples/', import.meta.url);

describe.skipIf(!existsSync(SAMPLES))(
	'a capture from a recorder, not of our own making (skipped where ../shared/samples is absent)',
	() => {
		it('gives the rms that an independent computation found', async () => {
			const stem = 'gen60_binary_1999';
			const files = ['cfg', 'dat'].map((extension) => ({
				name: `${stem}.${extension}`,
				bytes: new Uint8Array(readFileSync(new URL(`comtrade/${stem}.${extension}`, SAMPLES)))
			}));
			const { surveyId, captureId } = await analysed(files, { nominal_voltage_v: 13_800 });
			const expected = JSON.parse(readFileSync(new URL('expected.json', SAMPLES), 'utf8')).files[
				`comtrade/${stem}.cfg`
			].channels[0].windows[0] as { rms: number; from_sample: number; to_sample: number; fs_hz: number };
			const { readings } = await world.container.services.readings.page(owner, surveyId, captureId, {
				...ASKED,
				quantity: 'voltage'
			});
			const detail = readings!.detail;
			if (detail.kind !== 'waveform') throw new Error('a waveform was uploaded');
			const inside: number[] = [];
			for (let window = 1; window <= detail.windowCount; window++) {
				const page = await world.container.services.readings.page(owner, surveyId, captureId, {
					...ASKED,
					quantity: 'voltage',
					window
				});
				const one = page.readings!.detail;
				if (one.kind !== 'waveform') throw new Error('a waveform was uploaded');
				const from_s = expected.from_sample / expected.fs_hz;
				const to_s = expected.to_sample / expected.fs_hz;
				if (one.place!.from_s >= from_s && one.place!.to_s <= to_s)
					inside.push(
						one.channels.find((channel) => channel.phase === 'L1' && channel.quantity === 'voltage')!.rms!
					);
			}
			expect(inside.length).toBeGreaterThanOrEqual(5);
			const rms = Math.sqrt(inside.reduce((sum, value) => sum + value * value, 0) / inside.length);
			// expected.json: numpy, direct sum over 77 cycles, in kV; the two halves of it differ by 0.024 %.
			expect(Math.abs(rms / (1000 * expected.rms) - 1)).toBeLessThan(5e-4);
		});
	}
);
