/**
 * Percentile by nearest rank: the value at rank ceil(p·n), counted from 1. It never invents a value that was not measured.
 * sorted   [n] ascending, free of NaN (leave missing values out first, and count them)
 * p        0 < p ≤ 1
 * returns  one of the given values; NaN for an empty array
 * source   type 1 of Hyndman & Fan, The American Statistician 50(4), 1996; no power-quality standard fixes the rule
 */
export function percentileNearestRank(sorted: Float64Array, p: number): number {
	if (sorted.length === 0) return NaN;
	// 0.95·200 is 190.00000000000003 in binary: without the allowance the rank would slip to 191.
	const rank = Math.ceil(p * sorted.length - 1e-9);
	return sorted[Math.min(sorted.length, Math.max(1, rank)) - 1]!;
}
