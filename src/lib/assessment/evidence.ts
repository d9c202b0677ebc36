import { LEAST_RECORDED_SHARE } from '../harmonics/aggregation/interval-group';
import type { IntervalSeries } from '../harmonics/intervals';
import type { StatisticRule } from '../limits/limit-set';
import { localDayOf } from './local-day';

/**
 * When a period counts as complete. The standards state the period and not how much of it may be missing; these
 * two shares are this product's own rule, printed in the report's method section.
 * RECORDED: flagged or not, the recorder was running; one ten-minute interval at each end of a week may be cut.
 * VALID:    what remains after flagged intervals are left out.
 */
export const COMPLETE_RECORDED_SHARE = LEAST_RECORDED_SHARE;
export const COMPLETE_VALID_SHARE = 0.95;

const WEEK_MS = 7 * 86_400_000;

/** A stretch of consecutive intervals that a rule looks at as one period: [from, to) into the series. */
export interface RulePeriod {
	from: number;
	to: number;
	/** Local date of its first day at the site. */
	date: string;
	/** Intervals that the whole period holds: 1008 ten-minute values a week, 28 800 three-second values a day. */
	expected: number;
}

/**
 * Values below which a percentile by nearest rank is nothing but the greatest value: 20 for the 95th, 100 for
 * the 99th. Below it a capture is a snapshot.
 */
export function fewestForPercentile(percentile: number): number {
	return Math.ceil(100 / (100 - percentile) - 1e-9);
}

/** First index whose start is not before `time_ms`; starts ascending. */
function firstFrom(starts_ms: Float64Array, time_ms: number): number {
	let low = 0;
	let high = starts_ms.length;
	while (low < high) {
		const middle = (low + high) >> 1;
		if (starts_ms[middle]! < time_ms) low = middle + 1;
		else high = middle;
	}
	return low;
}

/** Calendar days of the site, each as long as it really was (23, 24 or 25 h). */
function dailyPeriods(series: IntervalSeries, rule: StatisticRule, timeZone: string): RulePeriod[] {
	const { starts_ms } = series;
	const periods: RulePeriod[] = [];
	let from = 0;
	while (from < starts_ms.length) {
		const day = localDayOf(starts_ms[from]!, timeZone);
		const to = firstFrom(starts_ms, day.end_ms);
		periods.push({
			from,
			to,
			date: day.date,
			expected: (day.end_ms - day.start_ms) / (1000 * rule.interval_s)
		});
		from = to;
	}
	return periods;
}

/**
 * Seven consecutive days from the first interval, and again from there; what is left at the end is covered by
 * the last seven days of the survey, so that no interval stays outside every week.
 */
function weeklyPeriods(series: IntervalSeries, rule: StatisticRule, timeZone: string): RulePeriod[] {
	const { starts_ms } = series;
	const n = starts_ms.length;
	if (n === 0) return [];
	const interval_ms = 1000 * rule.interval_s;
	const begin_ms = starts_ms[0]!;
	const end_ms = starts_ms[n - 1]! + interval_ms;
	const weekStarts: number[] = [begin_ms];
	for (let start = begin_ms + WEEK_MS; start + WEEK_MS <= end_ms; start += WEEK_MS) weekStarts.push(start);
	const last = weekStarts[weekStarts.length - 1] ?? begin_ms;
	if (last + WEEK_MS < end_ms) weekStarts.push(end_ms - WEEK_MS);
	return weekStarts.map((start_ms) => ({
		from: firstFrom(starts_ms, start_ms),
		to: firstFrom(starts_ms, start_ms + WEEK_MS),
		date: localDayOf(start_ms, timeZone).date,
		expected: WEEK_MS / interval_ms
	}));
}

/** The periods in which a rule is to be met, each on its own; every one of them must be. */
export function rulePeriods(series: IntervalSeries, rule: StatisticRule, timeZone: string): RulePeriod[] {
	return rule.period === 'day' ? dailyPeriods(series, rule, timeZone) : weeklyPeriods(series, rule, timeZone);
}

/** Whether a period is complete enough for the rule to be called met or broken without reserve. */
export function isComplete(validCount: number, flaggedCount: number, expected: number): boolean {
	return (
		validCount + flaggedCount >= COMPLETE_RECORDED_SHARE * expected &&
		validCount >= COMPLETE_VALID_SHARE * expected
	);
}
