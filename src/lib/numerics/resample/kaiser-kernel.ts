/**
 * Modified Bessel function of the first kind, order 0, by its power series.
 * x        0 ≤ x ≤ 30
 * error    a few ulp relative (all terms positive)
 */
export function besselI0(x: number): number {
	const quarter = (x * x) / 4;
	let term = 1;
	let sum = 1;
	for (let k = 1; k < 200; k++) {
		term *= quarter / (k * k);
		sum += term;
		if (term < sum * 1e-17) break;
	}
	return sum;
}

/** A low-pass interpolation kernel, continuous in time, in units of the input's sampling interval. */
export interface KaiserKernel {
	/** Centre of the transition band, cycles per sample. */
	cutoff: number;
	/** Half of the support, samples; the kernel is 0 outside. */
	halfWidth: number;
	beta: number;
}

/**
 * Kernel that passes up to `passband` and stops from `stopband` on.
 * passband, stopband  cycles per sample, 0 < passband < stopband
 * attenuation_dB      of the stopband, and of the passband's ripple; ≥ 50
 * source              Kaiser's design formulas as in Oppenheim & Schafer, Discrete-Time Signal Processing, 7.5 (from memory);
 *                     the response is measured in tests/numerics
 */
export function designKaiserKernel(passband: number, stopband: number, attenuation_dB: number): KaiserKernel {
	const transition = stopband - passband;
	const taps = (attenuation_dB - 7.95) / (14.36 * transition) + 1;
	return {
		cutoff: (passband + stopband) / 2,
		halfWidth: Math.max(4, Math.ceil(taps / 2)),
		beta: 0.1102 * (attenuation_dB - 8.7)
	};
}

/** The kernel as a function of the distance t (samples) from its centre. */
export function kaiserKernelFunction(kernel: KaiserKernel): (t: number) => number {
	const { cutoff, halfWidth, beta } = kernel;
	const whole = besselI0(beta);
	return (t) => {
		const relative = t / halfWidth;
		if (relative <= -1 || relative >= 1) return 0;
		const taper = besselI0(beta * Math.sqrt(1 - relative * relative)) / whole;
		const x = 2 * cutoff * t;
		const sinc = x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x);
		return 2 * cutoff * sinc * taper;
	};
}
