import { describe, expect, it } from 'vitest';
import { assess } from '$lib/assessment/assess';
import type { Assessment } from '$lib/assessment/assessment';
import { fewestForPercentile, rulePeriods } from '$lib/assessment/evidence';
import { mergeSeries } from '$lib/assessment/merge-series';
import { ruleOutcome } from '$lib/assessment/rule-outcome';
import type { IntervalSeries } from '$lib/harmonics/intervals';
import { limitSet } from '../limits/load-limit-files';
import { DAY_3S, EXACT, makeSeries, POINT, spectrum, WEEK_10MIN, type SeriesPlan } from './series-builder';

const IEEE = limitSet('ieee-519-2022');
const EN = limitSet('en-50160-2022');

function current(plan: Partial<SeriesPlan> & Pick<SeriesPlan, 'interval' | 'count'>): IntervalSeries[] {
	return (['L1', 'L2', 'L3'] as const).map((phase) =>
		makeSeries({ quantity: 'current', phase, level: spectrum(1000, { 5: 5 }), ...plan })
	);
}

function run(series: IntervalSeries[], siteTimeZone = 'UTC', set = IEEE): Assessment {
	const tableKeys = set === IEEE ? ['table-2'] : undefined;
	return assess({
		...{ point: POINT, limitSet: set, series, siteTimeZone, uncertainty: EXACT, decisionRule: 'guarded' },
		tableKeys
	});
}

const fifth = (assessment: Assessment, key?: string) =>
	assessment.rows.filter(
		(row) =>
			row.item.kind === 'order' &&
			row.item.order === 5 &&
			row.phase === 'L1' &&
			(key === undefined || row.statisticKey === key)
	);

it('a percentile means something from 20 values at 95 % and 100 at 99 %', () => {
	expect([95, 99, 90, 50].map(fewestForPercentile)).toEqual([20, 100, 10, 2]);
});

describe('periods without data', () => {
	const part = (start: string, count: number, interval: '3s' | '10min') =>
		makeSeries({ quantity: 'current', phase: 'L1', interval, count, start, level: spectrum(1000, { 5: 5 }) });
	const rules = IEEE.tables.find((table) => table.key === 'table-2')!.statistics;
	const daily = rules.find((rule) => rule.period === 'day')!;
	const weekly = rules.find((rule) => rule.period === 'week')!;

	it('a day in which nothing was recorded is no period, and the days beside it keep their dates', () => {
		const series = mergeSeries([
			part('2026-03-27T23:00:00Z', 200, '3s'),
			part('2026-03-29T10:00:00Z', 300, '3s')
		]);
		expect(rulePeriods(series, daily, 'Europe/Berlin')).toEqual([
			{ from: 0, to: 200, date: '2026-03-28', expected: 28_800 },
			// The clocks go forward: 23 hours.
			{ from: 200, to: 500, date: '2026-03-29', expected: 27_600 }
		]);
	});

	it('a week without values neither governs nor passes', () => {
		const series = mergeSeries([
			part('2026-03-02T00:00:00Z', WEEK_10MIN, '10min'),
			part('2026-03-16T00:00:00Z', WEEK_10MIN, '10min')
		]);
		const periods = rulePeriods(series, weekly, 'UTC');
		expect(periods.map(({ date, from, to }) => [date, to - from])).toEqual([
			['2026-03-02', WEEK_10MIN],
			['2026-03-09', 0],
			['2026-03-16', WEEK_10MIN]
		]);
		const levels_pct = Float64Array.from(series.starts_ms, (_, i) => (i < WEEK_10MIN ? 1 : 2));
		const outcome = ruleOutcome(series, levels_pct, weekly, periods);
		expect(outcome).toMatchObject({
			kind: 'evaluated',
			completePeriods: 2,
			greaterIncomplete: null,
			governing: { date: '2026-03-16', value_pct: 2, complete: true }
		});
	});
});

describe('weekly', () => {
	it('asks for 1008 ten-minute values, less one at each end', () => {
		const evidence = (count: number) =>
			fifth(run(current({ interval: '10min', count })), 'I-week-95')[0]?.evidence;
		expect(evidence(1008)).toBe('weekly');
		expect(evidence(1006)).toBe('weekly');
		expect(evidence(998)).toBe('weekly');
		expect(evidence(997)).toBe('partial');
		expect(evidence(144)).toBe('partial');
	});

	it('falls to partial when too many intervals are flagged', () => {
		const evidence = (share: number) =>
			fifth(
				run(current({ interval: '10min', count: WEEK_10MIN, flagged: (i) => i % 100 < share })),
				'I-week-95'
			)[0];
		expect(evidence(4)?.evidence).toBe('weekly');
		expect(evidence(6)?.evidence).toBe('partial');
		expect(evidence(6)?.coverage).toBeCloseTo((WEEK_10MIN - 66 + 6 - 6) / WEEK_10MIN, 2);
	});

	it('takes each seven days on their own, the last seven included', () => {
		// Ten days; only the last two hold more than the limit: they must govern through the last week.
		const level = (order: number, i: number) =>
			order === 1 ? 1000 : order === 5 ? (i >= 8 * 144 ? 90 : 10) : 0;
		const assessment = run(current({ interval: '10min', count: 10 * 144, level }));
		const row = fifth(assessment, 'I-week-95')[0];
		expect(row?.value_pct).toBe(9);
		expect(row?.verdict).toBe('exceeds');
		expect(row?.reason).toContain('from 2026-03-05');
	});
});

describe('daily', () => {
	it('judges site-local days and names the worst', () => {
		// The second local day in Chicago begins at 06:00 UTC; the loud hours lie between 00:00 and 06:00 UTC of the
		// second UTC day, that is on the first local day.
		const loudFrom = (24 - 6) * 1200;
		const level = (order: number, i: number) =>
			order === 1 ? 1000 : order === 5 ? (i >= loudFrom && i < loudFrom + 6 * 1200 ? 200 : 10) : 0;
		const series = current({ interval: '3s', count: 2 * DAY_3S, start: '2026-03-02T06:00:00Z', level });
		const chicago = fifth(run(series, 'America/Chicago'), 'I-day-99')[0];
		expect(chicago?.worstPeriod).toBe('2026-03-02');
		expect(chicago?.value_pct).toBe(20);
		expect(chicago?.evidence).toBe('weekly');
		const utc = fifth(run(series, 'UTC'), 'I-day-99')[0];
		expect(utc?.worstPeriod).toBe('2026-03-03');
	});

	it('leaves an incomplete day out of the verdict but tells of it', () => {
		// A complete quiet day, then three loud hours of the next.
		const level = (order: number, i: number) =>
			order === 1 ? 1000 : order === 5 ? (i >= DAY_3S ? 200 : 10) : 0;
		const row = fifth(run(current({ interval: '3s', count: DAY_3S + 3600, level })), 'I-day-99')[0];
		expect(row?.verdict).toBe('compliant');
		expect(row?.reason).toContain('On the incomplete day of 2026-03-03');
		expect(row?.reason).toContain('20.00 %');
	});

	it('is partial on less than a day, with the share covered', () => {
		const row = fifth(run(current({ interval: '3s', count: 7200 })), 'I-day-99')[0];
		expect(row?.evidence).toBe('partial');
		expect(row?.coverage).toBe(0.25);
	});
});

describe('snapshot', () => {
	it('shows the greatest value, compares it with the table value and says so', () => {
		const level = (order: number, i: number) => (order === 1 ? 1000 : order === 5 ? 50 + i : 0);
		const assessment = run([
			...current({ interval: 'window', count: 45, level }),
			...current({ interval: '3s', count: 3, level })
		]);
		const [row, ...others] = fifth(assessment);
		expect(others).toEqual([]);
		expect(row?.statisticKey).toBe('snapshot');
		expect(row?.value_pct).toBeCloseTo(5.2, 12);
		expect(row?.limit_pct).toBe(7);
		expect(row?.evidence).toBe('snapshot');
		expect(row?.reason).toContain('Greatest 3-second value of 3');
		expect(row?.reason).toContain('Indicative only');
		expect(assessment.evidence).toBe('snapshot');
	});

	it('takes single windows when the capture is shorter than three seconds', () => {
		const assessment = run(current({ interval: 'window', count: 8 }));
		expect(fifth(assessment)[0]?.reason).toContain('Greatest 10/12-cycle value of 8');
	});

	it('governs the evidence of a capture of two hours, which answers one rule of three', () => {
		const assessment = run([
			...current({ interval: '3s', count: 2400 }),
			...current({ interval: '10min', count: 12 })
		]);
		expect(fifth(assessment).map((row) => row.statisticKey)).toEqual(['I-day-99', 'snapshot']);
		expect(assessment.evidence).toBe('snapshot');
	});

	it('is all that an edition without percentile rules can give', () => {
		const assessment = assess({
			...{ point: POINT, limitSet: limitSet('ieee-519-1992'), siteTimeZone: 'UTC', uncertainty: EXACT },
			...{ decisionRule: 'guarded', series: current({ interval: '3s', count: DAY_3S }) },
			tableKeys: ['table-10-3']
		});
		expect(fifth(assessment)[0]?.reason).toContain('states no percentile rule');
		expect(assessment.evidence).toBe('snapshot');
	});
});

describe('a rule that cannot be answered', () => {
	it('is not assessed beside those that can: a week of ten-minute values without three-second ones', () => {
		const assessment = run(current({ interval: '10min', count: WEEK_10MIN }));
		const daily = fifth(assessment, 'I-day-99')[0];
		expect(daily?.verdict).toBe('not-assessed');
		expect(daily?.reason).toContain('no 3-second values were recorded');
		expect(fifth(assessment, 'I-week-95')[0]?.verdict).toBe('compliant');
		expect(assessment.verdict).toBe('not-assessed');
		expect(assessment.tables[0]?.evidence).toBe('partial');
	});

	it('does not hide an exceedance of the others', () => {
		const level = spectrum(1000, { 5: 12 });
		expect(run(current({ interval: '10min', count: WEEK_10MIN, level })).verdict).toBe('exceeds');
	});

	it('says how many values a short log lacks', () => {
		const assessment = run(current({ interval: '10min', count: 12 }));
		expect(fifth(assessment)[0]?.reason).toContain('needs at least 20 valid values; 12 were recorded');
		expect(assessment.verdict).toBe('not-assessed');
	});
});

describe('EN 50160', () => {
	it('is answered wholly by a week of ten-minute values', () => {
		const volts = (['L1', 'L2', 'L3'] as const).map((phase) =>
			makeSeries({
				...{ quantity: 'voltage', phase, interval: '10min', count: WEEK_10MIN },
				level: spectrum(277, { 5: 5.9, 7: 4 })
			})
		);
		const assessment = run(volts, 'UTC', EN);
		expect(assessment.verdict).toBe('compliant');
		expect(assessment.evidence).toBe('weekly');
		expect(assessment.rows.every((row) => row.comparator === '<=')).toBe(true);
		expect(Math.max(...assessment.rows.map((row) => (row.item.kind === 'order' ? row.item.order : 0)))).toBe(
			25
		);
	});
});

describe('several captures', () => {
	it('are one series, and an interval that both hold counts once', () => {
		const early = current({ interval: '10min', count: 600 });
		const late = current({
			interval: '10min',
			count: 508,
			start: new Date(Date.parse('2026-03-02T00:00:00Z') + 500 * 600_000).toISOString()
		});
		const row = fifth(run([...late, ...early]), 'I-week-95')[0];
		expect(row?.intervalCount).toBe(1008);
		expect(row?.evidence).toBe('weekly');
	});
});
