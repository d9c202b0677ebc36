import { ORDER_STRIDE, type IntervalSeries } from './intervals';
import type { WaveformWindows } from './waveform-analysis';

/**
 * The windows of an analysis as interval series, one per channel.
 * start_ms  moment of sample 0, milliseconds since 1970-01-01 UTC
 * returns   series of kind 'window'; matrices are the analysis' own, not copies
 */
export function toWindowSeries(analysis: WaveformWindows, start_ms: number): IntervalSeries[] {
	const starts_ms = analysis.windowStarts_s.map((s) => start_ms + 1000 * s);
	return analysis.channels.map((channel) => ({
		quantity: channel.mapping.quantity,
		phase: channel.mapping.phase,
		interval: 'window',
		starts_ms,
		lengths_s: analysis.windowLengths_s,
		rms: channel.rms,
		frequency_Hz: analysis.frequency_Hz,
		subgroups: channel.subgroups,
		flagged: analysis.flagged
	}));
}

/** A series with room for `count` intervals, everything "no data". */
export function emptySeries(
	like: Pick<IntervalSeries, 'quantity' | 'phase' | 'interval'>,
	count: number
): IntervalSeries {
	return {
		quantity: like.quantity,
		phase: like.phase,
		interval: like.interval,
		starts_ms: new Float64Array(count),
		lengths_s: new Float64Array(count),
		rms: new Float64Array(count).fill(NaN),
		frequency_Hz: new Float64Array(count).fill(NaN),
		subgroups: new Float64Array(count * ORDER_STRIDE).fill(NaN),
		flagged: new Uint8Array(count)
	};
}
