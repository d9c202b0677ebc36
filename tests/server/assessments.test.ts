import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openReportsWorld, type ReportsWorld } from './reports-world';
import { workOff } from './captures-world';

let world: ReportsWorld;
beforeEach(async () => {
	world = await openReportsWorld();
});
afterEach(() => world.close());

const services = () => world.container.services;
const page = (showAll = false, table: string | null = null) =>
	services().assessments.page(world.engineer, world.surveyId, { table, showAll });

describe('an assessment', () => {
	it('is made by the worker after the analysis, with every row', async () => {
		const { assessment } = await page();
		expect(assessment?.verdict).toBe('exceeds');
		// Four seconds hold no percentile: IEEE Std 519-2022, clause 4.2 asks for days and weeks.
		expect(assessment?.evidence).toBe('snapshot');
		expect(assessment?.tables.map((table) => table.quantity)).toEqual(['voltage', 'current']);
		const all = await page(true);
		const rows = await world
			.db('verdict_rows')
			.where({ assessment_id: all.assessment?.id, table_key: all.view?.key });
		expect(all.view?.lines.length).toBe(rows.length);
	});

	it('shows the worst phase at each order with the row that it was held against', async () => {
		const { view, assessment } = await page();
		expect(view?.key).toBe(assessment?.worst?.tableKey);
		const fifth = view?.lines.find((line) => line.item.kind === 'order' && line.item.order === 5);
		// 7 % at orders 2 to 10 for 20 < I_sc/I_L < 50 (IEEE Std 519-2022, table 2).
		expect(fifth?.limit_pct).toBe(7);
		expect(fifth?.limitRow?.limit_pct).toBe(7);
		expect(fifth?.limitRow?.what).toContain('I_sc/I_L');
		expect(new Set(view?.lines.map((line) => JSON.stringify(line.item))).size).toBe(view?.lines.length);
	});

	it('states which facts are missing, and for what, instead of a verdict on current', async () => {
		await world.db('points').where({ id: world.pointId }).update({ demand_json: '{"method":"unknown"}' });
		await services().assessments.refresh(world.engineer, world.surveyId);
		const { assessment } = await page();
		expect(assessment?.tables.find((table) => table.quantity === 'current')?.verdict).toBe('not-assessed');
		expect(assessment?.missing.join(' ')).toMatch(/demand load current/);
		expect(assessment?.verdict).not.toBe('compliant');
	});

	it('is judged by another limit set and rule when the engineer says so', async () => {
		const en = await world.db('limit_sets').where({ key: 'en-50160-2022' }).first();
		await services().assessments.judgeBy(world.engineer, world.surveyId, {
			limitSetId: en!.id,
			decisionRule: 'simple'
		});
		const { assessment } = await page();
		expect(assessment?.decisionRule).toBe('simple');
		// EN 50160 describes the voltage and says nothing about current.
		expect(new Set(assessment?.tables.map((table) => table.quantity))).toEqual(new Set(['voltage']));
		expect(await world.db('assessments').where({ survey_id: world.surveyId, is_current: 1 })).toHaveLength(1);
	});

	it('says that an in-plant comparison is advisory', async () => {
		await world.db('points').where({ id: world.pointId }).update({ kind: 'in-plant' });
		await services().assessments.refresh(world.engineer, world.surveyId);
		const { assessment } = await page();
		expect(assessment?.advisory).toBe(true);
		expect(assessment?.sentence).toMatch(/advisory/);
	});

	it('keeps its identity when it is made again with the same outcome, so that drafts stay up to date', async () => {
		const before = (await page()).assessment?.id;
		await services().assessments.refresh(world.engineer, world.surveyId);
		expect((await page()).assessment?.id).toBe(before);
		expect(await world.db('assessments').where({ survey_id: world.surveyId })).toHaveLength(1);
	});

	it('is made again by itself when the point changes', async () => {
		const { surveys, register } = services();
		const survey = (await world.db('surveys').where({ id: world.surveyId }).first())!;
		const { facts } = await surveys.point(world.engineer, world.surveyId);
		const before = (await page()).assessment?.headline.tdd[0]?.value_pct ?? NaN;
		await register.updatePoint(world.engineer, survey.client_id, survey.site_id, world.pointId, {
			...facts,
			demand: { method: 'entered', demandCurrent_A: 400, source: 'meter' }
		});
		expect((await page()).working).not.toBeNull();
		await workOff(world.container);
		expect((await page()).assessment?.headline.tdd[0]?.value_pct).toBeCloseTo(2 * before, 9);
		expect((await page()).working).toBeNull();
	});

	it('stands no longer when its capture is removed', async () => {
		const capture = await world.db('captures').where({ survey_id: world.surveyId }).first('id');
		await services().captures.remove(world.engineer, world.surveyId, capture!.id);
		await workOff(world.container);
		const { assessment, whyNone } = await page();
		expect(assessment).toBeNull();
		expect(whyNone).toMatch(/Upload a capture/);
	});

	it('is another practice’s business only', async () => {
		const query = { table: null, showAll: false };
		await expect(services().assessments.page(world.stranger, world.surveyId, query)).rejects.toMatchObject({
			code: 'not-found'
		});
		await expect(services().assessments.refresh(world.stranger, world.surveyId)).rejects.toMatchObject({
			code: 'not-found'
		});
		await expect(services().assessments.page(world.client, world.surveyId, query)).rejects.toMatchObject({
			code: 'forbidden'
		});
	});
});

describe('recommended actions', () => {
	it('offers what a six-pulse spectrum calls for, with its cautions, and takes it over once', async () => {
		const { actions } = services();
		const before = await actions.page(world.engineer, world.surveyId);
		const reactors = before.suggestions.find((one) => one.key === 'six-pulse-reactors');
		expect(reactors?.detail).toMatch(/licensed engineer/);
		expect(before.suggestions.map((one) => one.key)).toContain('measure-week');
		await actions.addSuggested(world.engineer, world.surveyId, 'six-pulse-reactors');
		const after = await actions.page(world.engineer, world.surveyId);
		expect(after.actions.map((one) => one.title)).toEqual([reactors?.title]);
		expect(after.suggestions.map((one) => one.key)).not.toContain('six-pulse-reactors');
	});

	it('keeps the order given, and what the client has seen', async () => {
		const { actions } = services();
		const facts = { detail: '', priority: 'normal', side: 'client', responsible: '', dueOn: '' } as const;
		const first = await actions.add(world.engineer, world.surveyId, { ...facts, title: 'First' });
		const second = await actions.add(world.engineer, world.surveyId, { ...facts, title: 'Second' });
		await actions.move(world.engineer, world.surveyId, second, 'up');
		const titles = async () =>
			(await actions.page(world.engineer, world.surveyId)).actions.map((one) => one.title);
		expect(await titles()).toEqual(['Second', 'First']);
		await world.db('actions').where({ id: first }).update({ published_at: '2026-03-19T10:00:00.000Z' });
		await expect(actions.remove(world.engineer, world.surveyId, first)).rejects.toMatchObject({
			code: 'conflict'
		});
		await actions.remove(world.engineer, world.surveyId, second);
		expect(await titles()).toEqual(['First']);
	});
});
