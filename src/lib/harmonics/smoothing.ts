/** Time constant of the smoothing filter, seconds. */
const TIME_CONSTANT_S = 1.5;

/**
 * First-order low-pass of 1.5 s over the results of consecutive windows, as emission tests with fluctuating harmonics ask
 * for; surveys do not use it.
 * values    [n] one figure per window; a missing one (NaN) is not filtered and starts the filter anew
 * window_s  length of a window
 * returns   [n] y_n = (x_n + β·y_{n−1})/α with α = 1/(1 − e^(−T/1.5 s)), β = α − 1, y_0 = x_0
 * source    IEC 61000-4-7:2002+A1:2008, 5.5.1 (from memory; α = 8.012, 5.206 and 6.14 for 200, 320 and 267 ms)
 */
export function smoothWindows(values: Float64Array, window_s: number): Float64Array {
	const alpha = 1 / (1 - Math.exp(-window_s / TIME_CONSTANT_S));
	const out = new Float64Array(values.length);
	let before = NaN;
	for (let i = 0; i < values.length; i++) {
		const value = values[i]!;
		before = Number.isNaN(before) ? value : (value + (alpha - 1) * before) / alpha;
		out[i] = before;
	}
	return out;
}
