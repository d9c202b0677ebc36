import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { CaptureFile, TrendSeries } from '$lib/recording/recording';
import { writeDelimitedTrend, type TrendToWrite } from '$lib/synthesis/delimited-text-writer';
import { writePqdifTrend } from '$lib/synthesis/pqdif-writer';
import { confirmAsSuggested, onlyCapture, surveyAtPoint, upload, workOff } from './captures-world';
import { openReportsWorld, type ReportsWorld } from './reports-world';

let world: ReportsWorld;
beforeEach(async () => {
	world = await openReportsWorld();
});
afterEach(() => world.close());

const DAY_S = 86_400;
const OTHER_ORDERS = Array.from({ length: 49 }, (_, i) => i + 2).filter((order) => order !== 5);

interface LogTruth {
	interval_s: number;
	days: number;
	/** Largest fifth of the day: of the voltage in percent of 277 V, of the current in percent of 800 A, which is I_L. */
	voltage_pct: number;
	current_pct: number;
	/** Orders 2 to 50 of the voltage beside the fifth, a tenth of a percent each: the THD of EN 50160 sums to 40. */
	otherOrders: readonly number[];
}

/** Days of the site's own clock, New York; the load swings by 20 % once a day. */
function log({ interval_s, days, voltage_pct, current_pct, otherOrders }: LogTruth): TrendToWrite {
	const count = (days * DAY_S) / interval_s;
	const load = (i: number) => 0.8 + 0.2 * Math.sin((2 * Math.PI * i * interval_s) / DAY_S);
	const series: TrendSeries[] = (['L1', 'L2', 'L3'] as const).flatMap((phaseHint) => {
		const one = (
			quantity: 'voltage' | 'current',
			order: number,
			value: (i: number) => number
		): TrendSeries => ({
			name: '',
			quantity,
			phaseHint,
			measure: { kind: 'order', order },
			unit: quantity === 'voltage' ? 'V' : 'A',
			values: Float64Array.from({ length: count }, (_, i) => Number(value(i).toPrecision(6)))
		});
		return [
			one('voltage', 1, () => 277),
			one('voltage', 5, (i) => 2.77 * voltage_pct * load(i)),
			...otherOrders.map((order) => one('voltage', order, () => 0.277)),
			one('current', 1, (i) => 600 * load(i)),
			one('current', 5, (i) => 8 * current_pct * load(i))
		];
	});
	return {
		start: { local: '2026-03-01T05:00:00', utcOffset_min: 0 },
		intervalStarts_s: Float64Array.from({ length: count }, (_, i) => i * interval_s),
		flagged: null,
		series
	};
}

/** From the bytes of a file to the assessment of a survey that holds nothing else. */
async function judged(file: CaptureFile, limitSet: 'ieee-519-2022' | 'en-50160-2022') {
	const { container, engineer, db } = world;
	const { surveyId } = await surveyAtPoint(db, engineer, {
		demand_json: '{"method":"entered","demandCurrent_A":800,"source":"meter"}',
		short_circuit_json: '{"method":"current","shortCircuitCurrent_A":25000,"source":"utility letter"}'
	});
	const { assessments } = container.services;
	await upload(container, engineer, surveyId, [file]);
	await workOff(container);
	await confirmAsSuggested(container, engineer, surveyId, await onlyCapture(db, surveyId));
	await workOff(container);
	const set = await db('limit_sets').where({ key: limitSet }).first();
	await assessments.judgeBy(engineer, surveyId, { limitSetId: set!.id, decisionRule: 'simple' });
	const { assessment } = await assessments.page(engineer, surveyId, { table: null, showAll: true });
	const rows = await db('verdict_rows')
		.where({ assessment_id: assessment!.id })
		.orderBy(['table_key', 'harmonic_order', 'index_name', 'phase', 'statistic_key'])
		.select(
			'table_key',
			'harmonic_order',
			'index_name',
			'phase',
			'statistic_key',
			'value_pct',
			'evidence',
			'verdict'
		);
	return { assessment: assessment!, rows };
}

function bothFormats(trend: TrendToWrite): { packed: CaptureFile; text: CaptureFile } {
	return {
		packed: writePqdifTrend(trend, { stem: 'log', compression: 'records', nominalFrequency_Hz: 60 }),
		text: writeDelimitedTrend(trend, { stem: 'log', digits: 6 })
	};
}

describe('a week of ten-minute values', () => {
	it.each([
		['compliant', 2],
		['exceeds', 7]
	])(
		'%s by a fifth of %i percent, on weekly evidence, from PQDIF and from text alike',
		async (verdict, voltage_pct) => {
			const files = bothFormats(
				log({ interval_s: 600, days: 7, voltage_pct, current_pct: 4, otherOrders: OTHER_ORDERS })
			);
			// EN 50160:2022, 4.2.5: 95 % of the ten-minute values of a week, 6 % at the fifth.
			const packed = await judged(files.packed, 'en-50160-2022');
			const text = await judged(files.text, 'en-50160-2022');
			for (const { assessment } of [packed, text]) {
				expect(assessment.verdict).toBe(verdict);
				expect(assessment.evidence).toBe('weekly');
			}
			expect(packed.rows.length).toBeGreaterThan(24);
			expect(packed.rows).toEqual(text.rows);
		},
		120_000
	);
});

describe('a day of three-second values', () => {
	it('gives the 99th percentile of the day, from PQDIF and from text alike', async () => {
		const files = bothFormats(
			log({ interval_s: 3, days: 1, voltage_pct: 2, current_pct: 9, otherOrders: [] })
		);
		const packed = await judged(files.packed, 'ieee-519-2022');
		const text = await judged(files.text, 'ieee-519-2022');
		const ofDay = packed.rows.filter(
			({ statistic_key, harmonic_order }) => statistic_key === 'I-day-99' && harmonic_order === 5
		);
		expect(ofDay.length).toBeGreaterThan(0);
		// Of a sine between 0.6 and 1 the value that 99 % of the day stays below: 0.8 + 0.2·cos(π·0.01).
		const expected_pct = 9 * (0.8 + 0.2 * Math.cos(Math.PI * 0.01));
		for (const { value_pct } of ofDay) expect(value_pct! / expected_pct).toBeCloseTo(1, 4);
		expect(packed.rows).toEqual(text.rows);
	}, 120_000);
});
