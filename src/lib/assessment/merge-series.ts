import { ORDER_STRIDE, type IntervalSeries } from '../harmonics/intervals';

/**
 * Lays series of one quantity, phase and interval kind from several captures together: ascending, and an
 * interval that two captures hold counts once (the earlier argument's).
 * parts  at least one; each ascending by itself
 */
export function mergeSeries(parts: IntervalSeries[]): IntervalSeries {
	const first = parts[0];
	if (first === undefined) throw new Error('mergeSeries needs a series');
	if (parts.length === 1) return first;
	const places = parts
		.flatMap((series) => Array.from(series.starts_ms, (start_ms, index) => ({ series, index, start_ms })))
		.sort((a, b) => a.start_ms - b.start_ms)
		.filter((place, index, all) => index === 0 || place.start_ms !== all[index - 1]?.start_ms);
	const n = places.length;
	const merged: IntervalSeries = {
		quantity: first.quantity,
		phase: first.phase,
		interval: first.interval,
		starts_ms: new Float64Array(n),
		lengths_s: new Float64Array(n),
		rms: new Float64Array(n),
		frequency_Hz: new Float64Array(n),
		subgroups: new Float64Array(n * ORDER_STRIDE),
		flagged: new Uint8Array(n)
	};
	for (const [at, { series, index, start_ms }] of places.entries()) {
		merged.starts_ms[at] = start_ms;
		merged.lengths_s[at] = series.lengths_s[index]!;
		merged.rms[at] = series.rms[index]!;
		merged.frequency_Hz[at] = series.frequency_Hz[index]!;
		merged.flagged[at] = series.flagged[index]!;
		const row = index * ORDER_STRIDE;
		merged.subgroups.set(series.subgroups.subarray(row, row + ORDER_STRIDE), at * ORDER_STRIDE);
	}
	return merged;
}
