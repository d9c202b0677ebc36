import { describe, expect, it } from 'vitest';
import { assess, type AssessmentInput } from '$lib/assessment/assess';
import type { Assessment, VerdictRow } from '$lib/assessment/assessment';
import type { IntervalKind, IntervalSeries } from '$lib/harmonics/intervals';
import type { Phase } from '$lib/recording/phase';
import { limitSet } from '../limits/load-limit-files';
import {
	DAY_3S,
	EXACT,
	FIVE_PERCENT,
	makeSeries,
	POINT,
	spectrum,
	WEEK_10MIN,
	type SeriesPlan
} from './series-builder';

const IEEE = limitSet('ieee-519-2022');
const EN = limitSet('en-50160-2022');
const U_LN = 480 / Math.sqrt(3);

function run(series: IntervalSeries[], change: Partial<AssessmentInput> = {}): Assessment {
	return assess({
		point: POINT,
		limitSet: IEEE,
		series,
		siteTimeZone: 'UTC',
		uncertainty: EXACT,
		decisionRule: 'guarded',
		...change
	});
}

function threePhases(
	quantity: 'voltage' | 'current',
	interval: IntervalKind,
	count: number,
	percents: Record<number, number>,
	change: Partial<SeriesPlan> = {}
): IntervalSeries[] {
	const full = quantity === 'current' ? 1000 : U_LN;
	const first = makeSeries({
		quantity,
		phase: 'L1',
		interval,
		count,
		level: spectrum(full, percents),
		...change
	});
	// The three phases share one matrix: building three of a day's 3-second values would take most of the test's time.
	return (['L1', 'L2', 'L3'] as const).map((phase) => ({ ...first, phase }));
}

/** A week of ten-minute and three-second values of both quantities; the shape of a full survey. */
function fullSurvey(currents: Record<number, number>, voltages: Record<number, number> = { 5: 1 }) {
	return [
		...threePhases('current', '10min', WEEK_10MIN, currents),
		...threePhases('current', '3s', DAY_3S, currents),
		...threePhases('voltage', '10min', WEEK_10MIN, voltages),
		...threePhases('voltage', '3s', DAY_3S, voltages)
	];
}

/** The same for currents alone, judged by the current table alone. */
function currentSurvey(currents: Record<number, number>, change: Partial<AssessmentInput> = {}): Assessment {
	const series = fullSurvey(currents).filter((one) => one.quantity === 'current');
	return run(series, { tableKeys: ['table-2'], ...change });
}

const rowsOf = (assessment: Assessment, order: number, phase: Phase, quantity = 'current'): VerdictRow[] =>
	assessment.rows.filter(
		(row) =>
			row.item.kind === 'order' &&
			row.item.order === order &&
			row.phase === phase &&
			row.quantity === quantity
	);

describe('a full survey under IEEE Std 519-2022', () => {
	const assessment = run(fullSurvey({ 5: 6.5, 7: 2 }));

	it('is compliant on weekly evidence, every rule of both tables answered', () => {
		expect(assessment.missing).toEqual([]);
		expect(assessment.tables.map((table) => [table.tableKey, table.verdict, table.evidence])).toEqual([
			['table-1', 'compliant', 'weekly'],
			['table-2', 'compliant', 'weekly']
		]);
		expect(assessment.verdict).toBe('compliant');
		expect(assessment.evidence).toBe('weekly');
		// 3 phases × (49 orders + 1 total) × (2 voltage rules + 3 current rules)
		expect(assessment.rows).toHaveLength(3 * 50 * 5);
	});

	it('multiplies the limit as each rule says, and names the row and class', () => {
		const rows = rowsOf(assessment, 5, 'L2');
		expect(rows.map((row) => [row.statisticKey, row.limit_pct, row.comparator])).toEqual([
			['I-day-99', 14, '<'],
			['I-week-99', 10.5, '<'],
			['I-week-95', 7, '<']
		]);
		expect(rows[2]?.value_pct).toBe(6.5);
		expect(rows[2]?.utilisation).toBeCloseTo(6.5 / 7, 15);
		expect(rows[2]?.reason).toContain('Clause 5.2: 95th percentile of the week’s 10-minute values');
		expect(rows[2]?.reason).toContain('Short-circuit ratio 35.0 lies in the class 20 < 50.');
		expect(assessment.tables[1]?.selection).toContain('Short-circuit ratio 35.0');
	});

	it('names the governing row', () => {
		expect(assessment.worst?.item).toEqual({ kind: 'order', order: 5 });
		expect(assessment.worst?.statisticKey).toBe('I-week-95');
	});

	it('shows TDD of demand current beside THD of the fundamental, and voltage THD of nominal', () => {
		const tdd = Math.hypot(6.5, 2);
		for (const figure of assessment.headline.tdd) expect(figure.value_pct).toBeCloseTo(tdd, 12);
		expect(assessment.headline.currentThd.map((figure) => figure.phase)).toEqual(['L1', 'L2', 'L3']);
		for (const figure of assessment.headline.voltageThd) expect(figure.value_pct).toBeCloseTo(1, 12);
		expect(assessment.headline.shortCircuitRatio).toBe(35);
	});
});

// Numbers: a paper on IEEE Std 519 and drives, IEEE PCIC 2003 (2003-15), table of measured currents; from memory.
describe('TDD is percent of demand current and not of what happened to flow', () => {
	it.each([
		[936, 35.57, 3.8, 3.8],
		[424, 21.2, 5, 2.264957265],
		[111, 13.32, 12, 1.423076923]
	])('fundamental %d A, harmonics %d A: THD %d %%, TDD %d %%', (fundamental_A, harmonics_A, thd, tdd) => {
		const level = (order: number) => (order === 1 ? fundamental_A : order === 5 ? harmonics_A : 0);
		const series = threePhases('current', '3s', 5, {}, { level });
		const point = { ...POINT, demandCurrent_A: 936, shortCircuitCurrent_A: 936 * 35 };
		const { headline } = run(series, { point });
		expect(headline.tdd[0]?.value_pct).toBeCloseTo(tdd, 1);
		expect(headline.currentThd[0]?.value_pct).toBeCloseTo(thd, 1);
	});

	it('sums orders 2 to 50 and leaves the fundamental and dc out', () => {
		const level = (order: number) => (order <= 1 ? 500 : 10);
		const { headline } = run(threePhases('current', '3s', 3, {}, { level }));
		expect(headline.tdd[0]?.value_pct).toBeCloseTo(Math.sqrt(49), 12);
	});
});

describe('exceedances', () => {
	it('are found on the phase where they are, and that phase is named', () => {
		const series = fullSurvey({ 5: 6 });
		const bad = makeSeries({
			quantity: 'current',
			phase: 'L3',
			interval: '10min',
			count: WEEK_10MIN,
			level: spectrum(1000, { 5: 9.63 })
		});
		const others = series.filter(
			(one) => !(one.quantity === 'current' && one.phase === 'L3' && one.interval === '10min')
		);
		const assessment = run([...others, bad]);
		expect(assessment.verdict).toBe('exceeds');
		expect(assessment.worst?.phase).toBe('L3');
		expect(assessment.worst?.value_pct).toBeCloseTo(9.63, 12);
		expect(rowsOf(assessment, 5, 'L1').every((row) => row.verdict === 'compliant')).toBe(true);
	});

	it('on the limit exceed under “less than” and keep it under “less than or equal”', () => {
		const onLimit = currentSurvey({ 5: 7 }, { decisionRule: 'simple' });
		expect(onLimit.verdict).toBe('exceeds');
		const volts = threePhases(
			'voltage',
			'10min',
			WEEK_10MIN,
			{ 5: 6 },
			{ level: (o) => (o === 1 ? 200 : o === 5 ? 12 : 0) }
		);
		expect(run(volts, { limitSet: EN, decisionRule: 'simple' }).verdict).toBe('compliant');
	});

	it('inside the uncertainty are neither passed nor failed', () => {
		const inside = (fifth: number) =>
			rowsOf(currentSurvey({ 5: fifth }, { uncertainty: FIVE_PERCENT }), 5, 'L1')[2];
		expect(inside(6.6)?.verdict).toBe('compliant');
		expect(inside(6.9)?.verdict).toBe('compliant-inside-uncertainty');
		expect(inside(7.2)?.verdict).toBe('exceeds-inside-uncertainty');
		expect(inside(7.4)?.verdict).toBe('exceeds');
		expect(inside(6.92)?.uncertainty_pct).toBeCloseTo(0.346, 12);
		expect(inside(6.92)?.reason).toContain('less than the uncertainty of 0.35');
	});

	it('of a total that lacks orders are proven by what was recorded; compliance never is', () => {
		const short = (fifth: number) =>
			run(threePhases('current', '10min', WEEK_10MIN, { 5: fifth }, { highestOrder: 25 })).rows.find(
				(row) => row.item.kind === 'total' && row.phase === 'L1' && row.quantity === 'current'
			);
		expect(short(9)?.verdict).toBe('exceeds');
		expect(short(9)?.reason).toContain('could only add');
		expect(short(3)?.verdict).toBe('not-assessed');
		expect(short(3)?.value_pct).toBeNull();
	});
});

describe('bases', () => {
	it('voltage is percent of nominal under IEEE 519 and of the fundamental under EN 50160', () => {
		// A sagging supply: 90 % of nominal, 5th harmonic 4.5 % of the fundamental.
		const fundamental_V = 0.9 * U_LN;
		const level = (order: number) => (order === 1 ? fundamental_V : order === 5 ? 0.045 * fundamental_V : 0);
		const series = threePhases('voltage', '10min', WEEK_10MIN, {}, { level });
		const value = (set: typeof IEEE) => rowsOf(run(series, { limitSet: set }), 5, 'L1', 'voltage').at(-1);
		expect(value(IEEE)?.value_pct ?? value(IEEE)).toBeCloseTo(4.05, 12);
		expect(value(EN)?.value_pct).toBeCloseTo(4.5, 12);
	});

	it('line-to-line channels of a three-wire point are percent of the line voltage', () => {
		const point = { ...POINT, system: 'three-wire', nominalVoltage_V: 13_800 } as const;
		const series = (['L1L2', 'L2L3', 'L3L1'] as const).map((phase) =>
			makeSeries({ quantity: 'voltage', phase, interval: '3s', count: 4, level: spectrum(13_800, { 5: 2 }) })
		);
		const assessment = run(series, { point });
		expect(rowsOf(assessment, 5, 'L1L2', 'voltage')[0]?.value_pct).toBeCloseTo(2, 12);
		expect(
			assessment.rows.filter((row) => row.quantity === 'voltage').every((row) => row.verdict === 'compliant')
		).toBe(true);
	});
});

describe('what is missing is said, and is never compliant', () => {
	const currents = threePhases('current', '10min', WEEK_10MIN, { 5: 1 });

	it('demand current', () => {
		const assessment = run(currents, { point: { ...POINT, demandCurrent_A: null } });
		expect(assessment.verdict).toBe('not-assessed');
		expect(assessment.missing.join(' ')).toContain('maximum demand load current');
		expect(assessment.rows.filter((row) => row.quantity === 'current')).toEqual([]);
	});

	it('short-circuit current', () => {
		const assessment = run(currents, { point: { ...POINT, shortCircuitCurrent_A: null } });
		expect(assessment.tables.find((table) => table.tableKey === 'table-2')?.verdict).toBe('not-assessed');
		expect(assessment.missing.join(' ')).toContain('short-circuit current');
	});

	it('a phase', () => {
		const assessment = run(fullSurvey({ 5: 1 }).filter((one) => one.phase !== 'L2'));
		expect(assessment.verdict).toBe('not-assessed');
		expect(assessment.missing.some((sentence) => sentence.includes('L2'))).toBe(true);
		expect(assessment.worst?.verdict).toBe('compliant');
	});

	it('a quantity', () => {
		const assessment = run(currents);
		expect(assessment.tables[0]?.verdict).toBe('not-assessed');
		expect(assessment.tables[0]?.worst).toBeNull();
	});

	it('the voltage between line and neutral at a four-wire point', () => {
		const series = (['L1L2', 'L2L3', 'L3L1'] as const).map((phase) =>
			makeSeries({ quantity: 'voltage', phase, interval: '3s', count: 4, level: spectrum(480, {}) })
		);
		expect(run(series).tables[0]?.verdict).toBe('not-assessed');
	});

	it('orders beyond the sampling rate, each with its reason', () => {
		const assessment = run(fullSurvey({ 5: 1 }).map((one) => reachTo(one, 40)));
		const row = rowsOf(assessment, 41, 'L1')[0];
		expect(row?.verdict).toBe('not-assessed');
		expect(row?.value_pct).toBeNull();
		expect(row?.limit_pct).toBe(0.5);
		expect(row?.reason).toContain('reaches the 40th order only');
		expect(rowsOf(assessment, 40, 'L1')[0]?.verdict).toBe('compliant');
		expect(assessment.verdict).toBe('not-assessed');
	});

	it('a single order that the log leaves blank', () => {
		const series = fullSurvey({ 5: 1 }).map((one) => blank(one, 9));
		expect(rowsOf(run(series), 9, 'L1')[0]?.reason).toContain('no valid value was recorded at the 9th');
	});

	it('a limit set without a table for the voltage', () => {
		const assessment = run(currents, { limitSet: EN, point: { ...POINT, nominalVoltage_V: 400_000 } });
		expect(assessment.verdict).toBe('not-assessed');
		expect(assessment.missing[0]).toContain('400 kV');
	});

	it('everything', () => {
		const assessment = run([]);
		expect(assessment.verdict).toBe('not-assessed');
		expect(assessment.worst).toBeNull();
		expect(assessment.headline.tdd).toEqual([]);
	});
});

function blank(series: IntervalSeries, order: number): IntervalSeries {
	const subgroups = series.subgroups.slice();
	for (let at = order; at < subgroups.length; at += 51) subgroups[at] = NaN;
	return { ...series, subgroups };
}

function reachTo(series: IntervalSeries, highest: number): IntervalSeries {
	let out = series;
	for (let order = highest + 1; order <= 50; order++) out = blank(out, order);
	return out;
}

describe('neutral, dc and flagged intervals', () => {
	it('the neutral is reported and not judged', () => {
		const neutral = makeSeries({
			quantity: 'current',
			phase: 'N',
			interval: '3s',
			count: DAY_3S,
			level: (order) => (order === 3 ? 600 : order === 1 ? 20 : 0)
		});
		const assessment = run([...fullSurvey({ 5: 1 }), neutral]);
		expect(assessment.verdict).toBe('compliant');
		expect(assessment.rows.some((row) => row.phase === 'N')).toBe(false);
		expect(assessment.notes?.join(' ')).toContain('neutral carried up to 600');
		expect(assessment.headline.tdd.find((figure) => figure.phase === 'N')?.value_pct).toBeCloseTo(60, 12);
	});

	it('dc is noted and not judged', () => {
		const level = (order: number) => (order === 0 ? 30 : order === 1 ? 1000 : 0);
		const assessment = run(threePhases('current', '3s', 5, {}, { level }));
		expect(assessment.notes?.filter((note) => note.includes('dc component')).length).toBe(3);
		expect(assessment.rows.some((row) => row.item.kind === 'order' && row.item.order < 2)).toBe(false);
	});

	it('flagged intervals are left out and counted', () => {
		// 40 intervals of 30 % are flagged: without the flag the weekly 99th percentile would be 30 %.
		const flagged = (i: number) => i % 25 === 0;
		const level = (order: number, i: number) =>
			order === 1 ? 1000 : order === 5 ? (flagged(i) ? 300 : 20) : 0;
		const series = threePhases('current', '10min', WEEK_10MIN, {}, { level, flagged });
		const row = rowsOf(run(series), 5, 'L1').find((one) => one.statisticKey === 'I-week-99');
		expect(row?.value_pct).toBe(2);
		expect(row?.flaggedCount).toBe(41);
		expect(row?.intervalCount).toBe(WEEK_10MIN - 41);
		expect(row?.evidence).toBe('weekly');
		const unflagged = threePhases('current', '10min', WEEK_10MIN, {}, { level });
		expect(rowsOf(run(unflagged), 5, 'L1').find((one) => one.statisticKey === 'I-week-99')?.value_pct).toBe(
			30
		);
	});
});

it('says at an in-plant point that the comparison is advisory', () => {
	expect(run([], { point: { ...POINT, kind: 'in-plant' } }).advisory).toBe(true);
	expect(run([]).advisory).toBe(false);
});

it('judges only the tables that were chosen', () => {
	const assessment = run(fullSurvey({ 5: 1 }), { tableKeys: ['table-2'] });
	expect(assessment.tables.map((table) => table.tableKey)).toEqual(['table-2']);
});

it('gives the same digits for the same input', () => {
	expect(JSON.stringify(run(fullSurvey({ 5: 6.123456789 })))).toBe(
		JSON.stringify(run(fullSurvey({ 5: 6.123456789 })))
	);
});
