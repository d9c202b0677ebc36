import type { IntervalSeries } from '../harmonics/intervals';
import type { StatisticRule } from '../limits/limit-set';
import { selectPercentileNearestRank } from '../numerics/stats/percentile-nearest-rank';
import { fewestForPercentile, isComplete, type RulePeriod } from './evidence';

/** One period's percentile and what stands behind it. */
export interface PeriodPercentile {
	date: string;
	/** Its intervals, [from, to) of the series. */
	from: number;
	to: number;
	value_pct: number;
	validCount: number;
	flaggedCount: number;
	coverage: number;
	complete: boolean;
}

export type RuleOutcome =
	| {
			kind: 'evaluated';
			/** The period that governs: complete ones before incomplete ones, then the greatest percentile. */
			governing: PeriodPercentile;
			/** An incomplete period whose percentile is greater than the governing one; never judged, always told. */
			greaterIncomplete: PeriodPercentile | null;
			completePeriods: number;
	  }
	/** Intervals of the right kind are there, but too few for the percentile to mean anything. */
	| { kind: 'too-few'; validCount: number; flaggedCount: number; needed: number }
	/** No interval holds a value of this item. */
	| { kind: 'no-value'; flaggedCount: number };

/**
 * Percentile of one period by nearest rank, flagged and missing intervals left out.
 * levels_pct  [n] percent, NaN = no data
 */
export function periodPercentile(
	levels_pct: Float64Array,
	flagged: Uint8Array,
	period: RulePeriod,
	percentile: number
): PeriodPercentile {
	const valid = new Float64Array(period.to - period.from);
	let validCount = 0;
	let flaggedCount = 0;
	for (let i = period.from; i < period.to; i++) {
		if (flagged[i] === 1) flaggedCount += 1;
		else if (!Number.isNaN(levels_pct[i]!)) valid[validCount++] = levels_pct[i]!;
	}
	return {
		date: period.date,
		from: period.from,
		to: period.to,
		value_pct: selectPercentileNearestRank(valid.subarray(0, validCount), percentile / 100),
		validCount,
		flaggedCount,
		coverage: Math.min(1, validCount / period.expected),
		complete: isComplete(validCount, flaggedCount, period.expected)
	};
}

function greatest(periods: PeriodPercentile[]): PeriodPercentile | null {
	return periods.reduce<PeriodPercentile | null>(
		(worst, period) => (worst === null || period.value_pct > worst.value_pct ? period : worst),
		null
	);
}

/** What one statistical rule says about one item on one phase. */
export function ruleOutcome(
	series: IntervalSeries,
	levels_pct: Float64Array,
	rule: StatisticRule,
	periods: RulePeriod[]
): RuleOutcome {
	const percentiles = periods.map((period) =>
		periodPercentile(levels_pct, series.flagged, period, rule.percentile)
	);
	const needed = fewestForPercentile(rule.percentile);
	const usable = percentiles.filter((period) => period.validCount >= needed);
	const complete = usable.filter((period) => period.complete);
	const governing = greatest(complete) ?? greatest(usable);
	if (governing === null) {
		const flaggedCount = series.flagged.reduce((count, flag) => count + flag, 0);
		const validCount = percentiles.reduce((most, period) => Math.max(most, period.validCount), 0);
		return validCount === 0
			? { kind: 'no-value', flaggedCount }
			: { kind: 'too-few', validCount, flaggedCount, needed };
	}
	const greaterIncomplete = greatest(
		usable.filter((period) => !period.complete && period.value_pct > governing.value_pct)
	);
	return { kind: 'evaluated', governing, greaterIncomplete, completePeriods: complete.length };
}
