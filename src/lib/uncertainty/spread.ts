import { selectRank } from '../numerics/stats/select-rank';

/** What the readings themselves tell of their spread: type A (JCGM 100:2008, 4.2). */
export interface Spread {
	source: 'window-noise' | 'missing-intervals';
	/** Standard uncertainty of the figure, its own unit. */
	u: number;
	degreesOfFreedom: number;
}

function finite(values: ArrayLike<number>): number[] {
	return Array.from(values).filter((value) => !Number.isNaN(value));
}

/**
 * Standard deviation of a mean over windows: s/√n, n − 1 degrees of freedom (JCGM 100:2008, 4.2.3).
 * values   [n] readings of one figure; NaN = no data, left out
 * returns  null for fewer than two readings
 */
export function spreadOfMean(values: ArrayLike<number>): Spread | null {
	const known = finite(values);
	const n = known.length;
	if (n < 2) return null;
	const mean = known.reduce((sum, value) => sum + value, 0) / n;
	const squares = known.reduce((sum, value) => sum + (value - mean) ** 2, 0);
	return { source: 'window-noise', u: Math.sqrt(squares / (n - 1) / n), degreesOfFreedom: n - 1 };
}

/**
 * Noise of a single reading out of a row of them, from the differences of neighbours, so that a slow change of the level
 * does not count as noise: s² = Σ(Δ²)/2(n−1). What truly changes from one interval to the next does count.
 * values   [n] in order of time; NaN = no data, left out
 * returns  null for fewer than two readings
 * source   von Neumann et al., Annals of Mathematical Statistics 12, 1941: ν = 2(n−1)²/(3n−4) (from memory)
 */
export function spreadOfSingle(values: ArrayLike<number>): Spread | null {
	const known = finite(values);
	const n = known.length;
	if (n < 2) return null;
	let squares = 0;
	for (let i = 1; i < n; i++) squares += (known[i]! - known[i - 1]!) ** 2;
	return {
		source: 'window-noise',
		u: Math.sqrt(squares / (2 * (n - 1))),
		degreesOfFreedom: (2 * (n - 1) ** 2) / (3 * n - 4)
	};
}

/**
 * What the intervals that were not measured could have made of a percentile. Half the distance between the values whose
 * ranks lie one standard deviation, √(n·p·(1−p)), on either side, times √(1 − coverage): a whole period is the period
 * and no sample of it. Neighbouring intervals are taken as independent, which understates long gaps.
 * values      [n] free of NaN; reordered in place
 * percentile  0 < p < 1
 * coverage    share of the period that was measured, 0 … 1
 * returns     null without values or without gaps
 * source      order-statistic interval and correction for a finite population: common practice of sampling
 */
export function spreadOfPercentile(
	values: Float64Array,
	percentile: number,
	coverage: number
): Spread | null {
	const n = values.length;
	if (n < 2 || !(coverage < 1)) return null;
	const reach = Math.sqrt(n * percentile * (1 - percentile));
	const place = (rank: number) => Math.min(n, Math.max(1, rank)) - 1;
	const low = selectRank(values, place(Math.floor(n * percentile - reach)));
	const high = selectRank(values, place(Math.ceil(n * percentile + reach)));
	return {
		source: 'missing-intervals',
		u: ((high - low) / 2) * Math.sqrt(1 - coverage),
		degreesOfFreedom: n - 1
	};
}
