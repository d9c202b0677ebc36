import type { Phase } from '../recording/phase';

/** Highest order kept by default (IEC 61000-4-30 class A; IEEE Std 519). */
export const MAX_ORDER = 50;

/** Row length of every per-order matrix: index 0 is dc, 1 the fundamental, …, MAX_ORDER. */
export const ORDER_STRIDE = MAX_ORDER + 1;

/** Interval kinds of IEC 61000-4-30: one 10/12-cycle window, 150/180 cycles, ten minutes and two hours of the clock. */
export type IntervalKind = 'window' | '3s' | '10min' | '2h';

/**
 * Harmonic values of one quantity on one phase over consecutive intervals of one kind.
 * It is what waveforms and trend logs both become, and all that an assessment looks at.
 * Absolute rms values on the primary side, V or A.
 */
export interface IntervalSeries {
	quantity: 'voltage' | 'current';
	phase: Phase;
	interval: IntervalKind;
	/** [n] start of each interval, milliseconds since 1970-01-01 UTC, ascending. */
	starts_ms: Float64Array;
	/** [n] length of each interval in seconds. */
	lengths_s: Float64Array;
	/** [n] true rms of the interval, harmonics and dc included; NaN = no data. */
	rms: Float64Array;
	/** [n] fundamental frequency in Hz; NaN = not known. */
	frequency_Hz: Float64Array;
	/** [n × ORDER_STRIDE] rms of each harmonic subgroup, row by row; NaN = no data for that order. */
	subgroups: Float64Array;
	/** [n] 1 where a dip, swell or interruption flags the interval (IEC 61000-4-30, flagging). */
	flagged: Uint8Array;
}
