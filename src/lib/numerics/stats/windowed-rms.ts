/**
 * Rms over a span whose ends may lie between samples: the squares joined by straight lines, integrated.
 * samples  any unit, one value per sampling interval
 * from,to  span in sample numbers, fractions allowed; 1 ≤ to − from, and both within [0, samples.length − 1]
 * returns  rms in the unit of the samples; any NaN in the span gives NaN
 * error    for a sine with r samples per cycle and n in the span, below 2/(r²·n)·10 relative (1e-6 at r = 128, n = 1280)
 */
export function windowedRms(samples: Float64Array, from: number, to: number): number {
	const first = Math.ceil(from);
	const last = Math.floor(to);
	let sum = 0;
	for (let i = first; i <= last; i++) sum += samples[i]! * samples[i]!;
	const atFirst = samples[first]! * samples[first]!;
	const atLast = samples[last]! * samples[last]!;
	sum -= (atFirst + atLast) / 2;
	const head = first - from;
	if (head > 0) {
		const before = samples[first - 1]! * samples[first - 1]!;
		sum += head * (atFirst + (head * (before - atFirst)) / 2);
	}
	const tail = to - last;
	if (tail > 0) {
		const after = samples[last + 1]! * samples[last + 1]!;
		sum += tail * (atLast + (tail * (after - atLast)) / 2);
	}
	return Math.sqrt(sum / (to - from));
}

/** Greatest absolute sample with from ≤ index ≤ to; NaN when any of them is missing. */
export function windowedPeak(samples: Float64Array, from: number, to: number): number {
	let peak = 0;
	for (let i = Math.ceil(from); i <= to; i++) {
		const value = Math.abs(samples[i]!);
		if (!(value <= peak)) peak = value;
		if (peak !== peak) return NaN;
	}
	return peak;
}
