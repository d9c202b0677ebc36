import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import type { ToldLayout } from '$lib/recording/readers/delimited-text/table-layout-told';
import { storePublishedLimitSet } from '$lib/server/repositories/published-limit-sets';
import { limitSet } from '../limits/load-limit-files';
import { NOW, openWorld, personOf, practiceWithOwner, type World } from '../support/practice-world';
import { confirmAsSuggested, onlyCapture, surveyAtPoint, upload, workOff } from './captures-world';

let world: World;
let owner: Actor;
let stranger: Actor;
beforeAll(async () => {
	world = await openWorld();
	await storePublishedLimitSet(world.db, limitSet('en-50160-2022'), new Date(NOW));
	owner = await practiceWithOwner(world.db, 'Tarn');
	stranger = await practiceWithOwner(world.db, 'Other');
});
afterAll(() => world.close());

/** A week of ten-minute values under headings that only its maker understands: U5 of 3.5 % and a quiet rest. */
function week(stem: string, firstDay = 3): { name: string; bytes: Uint8Array } {
	const lines = ['Stamp;P17;P18;P19'];
	for (let row = 0; row < 7 * 144; row++) {
		const at = new Date(Date.UTC(2026, 2, firstDay) + row * 600_000).toISOString();
		const [date, clock] = [at.slice(0, 10).split('-').reverse().join('.'), at.slice(11, 16)];
		lines.push(`${date} ${clock};${277 + (row % 5) / 10};3,5;0,${40 + (row % 7)}`);
	}
	return {
		name: `${stem}.csv`,
		bytes: new TextEncoder().encode(lines.join('\r\n').replace(/(\d)\.(\d);/g, '$1,$2;'))
	};
}

function told(layout: ToldLayout): ToldLayout {
	const value = { role: 'value', quantity: 'voltage', phase: 'L1', factor: 1, extreme: 'none' } as const;
	return {
		...layout,
		content: 'trend',
		columns: [
			{ role: 'time' },
			{ ...value, unit: 'V', measure: 'rms', order: null },
			{ ...value, unit: '%', measure: 'order', order: 5 },
			{ ...value, unit: '%', measure: 'order', order: 7 }
		]
	};
}

const tables = () => world.container.services.tables;
const detailOf = (surveyId: string, captureId: string) =>
	world.container.services.captures.detail(owner, surveyId, captureId).then(({ capture }) => capture);

async function uploaded(actor: Actor, file: { name: string; bytes: Uint8Array }) {
	const { surveyId, clientId } = await surveyAtPoint(world.db, actor);
	await upload(world.container, actor, surveyId, [file]);
	await workOff(world.container);
	return { surveyId, clientId, captureId: await onlyCapture(world.db, surveyId) };
}

describe('a table that nobody understands without help', () => {
	it('is kept, told, read, analysed, and reaches a verdict over its week', async () => {
		const { surveyId, captureId } = await uploaded(owner, week('first'));
		const untold = await detailOf(surveyId, captureId);
		expect(untold).toMatchObject({ kind: 'table', status: 'unread', isTold: false });
		expect(untold.problem).toMatch(/first\.csv .* no heading names an rms value/);
		await expect(confirmAsSuggested(world.container, owner, surveyId, captureId)).rejects.toMatchObject({
			code: 'conflict'
		});

		const page = await tables().page(owner, surveyId, captureId);
		if (!page) throw new Error('no page');
		expect(page.table.layout).toMatchObject({
			separator: ';',
			decimal: ',',
			content: 'trend',
			headingLines: [1],
			firstDataLine: 2,
			time: { format: 'day-first', zone: { kind: 'site' } }
		});
		expect(page.table.headings).toEqual(['Stamp', 'P17', 'P18', 'P19']);
		const layout = told(page.table.layout);
		const { preview } = await tables().preview(owner, captureId, layout, false);
		expect(preview.problem).toBeNull();
		expect(preview.facts).toMatchObject({ interval_s: 600, count: 1008, isEstimate: false, highestOrder: 7 });
		expect(preview.facts?.start?.local).toBe('2026-03-03T00:00:00');

		await tables().apply(owner, surveyId, captureId, layout, { keepAs: 'Dock logger', usedId: null });
		await workOff(world.container);
		const read = await detailOf(surveyId, captureId);
		expect(read).toMatchObject({ kind: 'trend', status: 'recognised', isTold: true, problem: null });
		// What was told is not asked for again.
		expect(read.facts.suggestions.map(({ mapping }) => mapping?.phase)).toEqual(['L1', 'L1', 'L1']);
		// Midnight in New York on 3 March, standard time (UTC−5; daylight time begins on 8 March 2026, common practice).
		expect(read.startedAt).toBe('2026-03-03T05:00:00.000Z');

		await confirmAsSuggested(world.container, owner, surveyId, captureId);
		await workOff(world.container);
		expect((await detailOf(surveyId, captureId)).status).toBe('analysed');
		const limits = await world.db('limit_sets').where({ key: 'en-50160-2022' }).first();
		await world.container.services.assessments.judgeBy(owner, surveyId, {
			limitSetId: limits!.id,
			decisionRule: 'simple'
		});
		const { assessment } = await world.container.services.assessments.page(owner, surveyId, {
			table: null,
			showAll: true
		});
		// Ten-minute values over one week are all that EN 50160 asks for (4.2.5 and 5.2.5, 95 % of a week).
		expect(assessment?.evidence).toBe('weekly');
		const rows = await world.db('verdict_rows').where({ assessment_id: assessment!.id, phase: 'L1' });
		const fifth = rows.find((row) => row.quantity === 'voltage' && row.harmonic_order === 5);
		expect(fifth).toMatchObject({ verdict: 'compliant', evidence: 'weekly' });
		expect(fifth?.value_pct).toBeCloseTo(3.5, 6);
	});

	it('is read without a question when the next file has the same headings, with a note that says why', async () => {
		const { surveyId, captureId } = await uploaded(owner, week('second', 10));
		const capture = await detailOf(surveyId, captureId);
		expect(capture).toMatchObject({ kind: 'trend', status: 'recognised', isTold: true });
		expect(capture.facts.remarks[0]).toMatchObject({ code: 'template-applied' });
		expect(capture.facts.remarks[0]?.sentence).toContain('“Dock logger”');
		const [template] = await tables().templates(owner);
		expect(template).toMatchObject({ name: 'Dock logger', usedCount: 2 });
	});

	it('offers the template where the headings are only alike', async () => {
		const { name, bytes } = week('third', 17);
		const text = new TextDecoder().decode(bytes).replace('P19', 'P20');
		const { surveyId, captureId } = await uploaded(owner, { name, bytes: new TextEncoder().encode(text) });
		expect((await detailOf(surveyId, captureId)).status).toBe('unread');
		const page = await tables().page(owner, surveyId, captureId);
		expect(page?.offers).toMatchObject([{ name: 'Dock logger', layout: { columns: { length: 4 } } }]);
		expect(page?.offers[0]?.layout.columns.map(({ role }) => role)).toEqual([
			'time',
			'value',
			'value',
			'ignore'
		]);
	});

	it('is nobody else’s business, and no other practice sees the template', async () => {
		const { surveyId, captureId } = await uploaded(stranger, week('fourth'));
		const page = await tables().page(stranger, surveyId, captureId);
		expect(page?.offers).toEqual([]);
		expect(await tables().templates(stranger)).toEqual([]);
		await expect(tables().page(owner, surveyId, captureId)).rejects.toMatchObject({ code: 'not-found' });
		const layout = told(page!.table.layout);
		await expect(tables().preview(owner, captureId, layout, false)).rejects.toMatchObject({
			code: 'not-found'
		});
		await expect(
			tables().apply(owner, surveyId, captureId, layout, { keepAs: null, usedId: null })
		).rejects.toMatchObject({ code: 'not-found' });
		const [template] = await tables().templates(owner);
		await expect(tables().renameTemplate(stranger, template!.id, 'Mine')).rejects.toMatchObject({
			code: 'not-found'
		});
		const own = await surveyAtPoint(world.db, owner);
		const client = await personOf(world.db, owner.practiceId, 'Tarn', 'Sam', 'client', own.clientId);
		await expect(tables().templates(client)).rejects.toMatchObject({ code: 'forbidden' });
	});
});

describe('telling', () => {
	it('says what is wrong, with line and column, and keeps nothing of it', async () => {
		const { surveyId, captureId } = await uploaded(stranger, week('wrong', 10));
		const page = await tables().page(stranger, surveyId, captureId);
		const layout = told(page!.table.layout);
		const apply = (change: Partial<ToldLayout>) =>
			tables().apply(stranger, surveyId, captureId, { ...layout, ...change }, { keepAs: null, usedId: null });
		await expect(apply({ decimal: '.' })).rejects.toThrow(
			/no cell of column 3 \(“P18”\) reads as a number with a decimal point; first “3,5” on line 2/
		);
		await expect(apply({ time: { ...layout.time, format: 'month-first' } })).rejects.toThrow(
			/column 1 \(“Stamp”\), written as a date such as 03\/05\/2024 10:20:30, but “13.03.2026 00:00” was found/
		);
		await expect(
			apply({ columns: [{ role: 'time' }, { role: 'ignore' }, { role: 'ignore' }, { role: 'ignore' }] })
		).rejects.toThrow(/No column is told to be an rms value/);
		expect((await detailOfStranger(surveyId, captureId)).isTold).toBe(false);
	});
	const detailOfStranger = (surveyId: string, captureId: string) =>
		world.container.services.captures.detail(stranger, surveyId, captureId).then(({ capture }) => capture);

	it('anew takes the readings of the earlier understanding out of the verdict', async () => {
		const { surveyId, captureId } = await uploaded(owner, week('again', 24));
		await confirmAsSuggested(world.container, owner, surveyId, captureId);
		await workOff(world.container);
		const page = await tables().page(owner, surveyId, captureId);
		expect(page?.isAnalysed).toBe(true);
		await tables().apply(owner, surveyId, captureId, page!.table.layout, { keepAs: null, usedId: null });
		await workOff(world.container);
		const capture = await detailOf(surveyId, captureId);
		expect(capture).toMatchObject({ status: 'recognised', settings: null, analysis: null });
	});
});

describe('templates', () => {
	it('are renamed and archived with a line in the history, and an archived one is not offered', async () => {
		const [template] = await tables().templates(owner);
		await tables().renameTemplate(owner, template!.id, '  Switchroom logger ');
		await expect(tables().renameTemplate(owner, template!.id, ' ')).rejects.toMatchObject({
			code: 'invalid'
		});
		await tables().setTemplateArchived(owner, template!.id, true);
		expect((await tables().templates(owner))[0]).toMatchObject({ name: 'Switchroom logger' });
		const { surveyId, captureId } = await uploaded(owner, week('fifth', 1));
		expect((await detailOf(surveyId, captureId)).status).toBe('unread');
		expect((await tables().page(owner, surveyId, captureId))?.offers).toEqual([]);
		const actions = await world
			.db('audit_events')
			.where({ practice_id: owner.practiceId, subject_kind: 'layout-template' })
			.orderBy('id')
			.pluck('action');
		expect(actions).toEqual(['layout-template.kept', 'layout-template.renamed', 'layout-template.archived']);
	});
});
