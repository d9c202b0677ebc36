/** Conventions of Hyndman & Fan that interpolate between values: 5 Hazen, 6 Weibull, 7 linear between the extremes. */
export type InterpolatedType = 5 | 6 | 7;

/** Offset m of each type: the percentile stands at rank n·p + m, counted from 1. */
const OFFSETS: Record<InterpolatedType, (p: number) => number> = {
	5: () => 0.5,
	6: (p) => p,
	7: (p) => 1 - p
};

/**
 * Percentile by linear interpolation between neighbouring ranks; shows how far conventions differ from the nearest rank.
 * sorted   [n] ascending, free of NaN
 * p        0 < p < 1
 * returns  unit of the values; the extreme where the rank lies beyond it; NaN for an empty array
 * source   Hyndman & Fan, Sample quantiles in statistical packages, The American Statistician 50(4), 1996
 */
export function interpolatedPercentile(sorted: Float64Array, p: number, type: InterpolatedType): number {
	const n = sorted.length;
	if (n === 0) return NaN;
	const rank = Math.min(n, Math.max(1, n * p + OFFSETS[type](p)));
	const below = Math.floor(rank);
	const lower = sorted[below - 1]!;
	const fraction = rank - below;
	return fraction > 0 ? lower + fraction * (sorted[below]! - lower) : lower;
}
