/** Levels that the short-term severity is made of, each already smoothed over its neighbours. */
export interface FlickerLevels {
	p0_1: number;
	p1s: number;
	p3s: number;
	p10s: number;
	p50s: number;
}

/**
 * Level that is exceeded for `share_pct` of the time: straight lines between the sorted values.
 * sorted  [n] ascending, n ≥ 1
 */
function exceededLevel(sorted: Float64Array, share_pct: number): number {
	const place = (1 - share_pct / 100) * sorted.length - 0.5;
	const low = Math.max(0, Math.min(sorted.length - 1, Math.floor(place)));
	const high = Math.min(sorted.length - 1, low + 1);
	const fraction = Math.max(0, Math.min(1, place - low));
	return sorted[low]! + fraction * (sorted[high]! - sorted[low]!);
}

/**
 * Smoothed percentiles of the instantaneous flicker.
 * sorted  [n] P_inst of the interval, ascending
 * source  IEC 61000-4-15:2010, 5.7.2 (smoothing read in public text)
 */
export function flickerLevels(sorted: Float64Array): FlickerLevels {
	const mean = (shares: readonly number[]) =>
		shares.reduce((sum, share) => sum + exceededLevel(sorted, share), 0) / shares.length;
	return {
		p0_1: exceededLevel(sorted, 0.1),
		p1s: mean([0.7, 1, 1.5]),
		p3s: mean([2.2, 3, 4]),
		p10s: mean([6, 8, 10, 13, 17]),
		p50s: mean([30, 50, 80])
	};
}

/** Short-term severity Pst. source  IEC 61000-4-15:2010, 5.7.2 (weights from memory; the tables confirm them) */
export function shortTermSeverity({ p0_1, p1s, p3s, p10s, p50s }: FlickerLevels): number {
	return Math.sqrt(0.0314 * p0_1 + 0.0525 * p1s + 0.0657 * p3s + 0.28 * p10s + 0.08 * p50s);
}

/** Long-term severity Plt of twelve Pst: the cube root of the mean cube; NaN when one is missing. */
export function longTermSeverity(pst: readonly number[]): number {
	return Math.cbrt(pst.reduce((sum, value) => sum + value ** 3, 0) / pst.length);
}
