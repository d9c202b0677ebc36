import { selectRank } from './select-rank';

/**
 * Percentile by nearest rank: the value at rank ceil(p·n), counted from 1. It never invents a value that was not measured.
 * sorted   [n] ascending, free of NaN (leave missing values out first, and count them)
 * p        0 < p ≤ 1
 * returns  one of the given values; NaN for an empty array
 * source   type 1 of Hyndman & Fan, The American Statistician 50(4), 1996; no power-quality standard fixes the rule
 */
export function percentileNearestRank(sorted: Float64Array, p: number): number {
	return sorted.length === 0 ? NaN : sorted[placeOf(sorted.length, p)]!;
}

/**
 * The same percentile of values in any order, in one pass or two and without a sort.
 * values   [n] free of NaN; reordered in place
 */
export function selectPercentileNearestRank(values: Float64Array, p: number): number {
	return values.length === 0 ? NaN : selectRank(values, placeOf(values.length, p));
}

function placeOf(n: number, p: number): number {
	// 0.95·200 is 190.00000000000003 in binary: without the allowance the rank would slip to 191.
	const rank = Math.ceil(p * n - 1e-9);
	return Math.min(n, Math.max(1, rank)) - 1;
}
