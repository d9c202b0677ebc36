/** A window of 10 cycles at 50 Hz or 12 at 60 Hz (IEC 61000-4-7) lasts so long. */
const WINDOW_S = 0.2;

/**
 * Least step of an input: a sine of its greatest rms value, from peak to peak, in 2ⁿ steps.
 * range_rms  greatest rms value at the input
 * returns    in the unit of range_rms
 */
export function stepOfInput(range_rms: number, resolution_bits: number): number {
	return (2 * Math.SQRT2 * range_rms) / 2 ** resolution_bits;
}

/** Samples in a window, whole ones. */
export function samplesPerWindow(samplingRate_Hz: number): number {
	return Math.floor(samplingRate_Hz * WINDOW_S);
}
