/**
 * Modified Bessel function of the first kind, order 0, by its power series.
 * x        0 ≤ x ≤ 100
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
	/** Centre of the transition band, cycles per sample; 0 for the bare taper (see designTaperKernel). */
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

/**
 * Kernel for spectra whose lines are equalised afterwards: the Kaiser taper alone. It stops from `stopband` on; below, it
 * droops, by an amount that is known in closed form (taperResponse) and undone line by line (planEqualiser). Half to a
 * third of the taps of designKaiserKernel do, as nothing has to be flat.
 * passband, stopband  cycles per sample, 0 < passband < stopband
 * attenuation_dB      least ratio of the response at `passband` to any at or above `stopband`
 * returns             null where the droop at `passband` would exceed a factor of 10 000: equalising lifts rounding with it
 * source              transform pair of the Kaiser window (Kaiser & Schafer, IEEE Trans. ASSP 28(1), 1980; from memory);
 *                     the response is measured in tests/numerics
 */
export function designTaperKernel(
	passband: number,
	stopband: number,
	attenuation_dB: number
): KaiserKernel | null {
	const ratio = 10 ** (attenuation_dB / 20);
	// sinh(y)/y = ratio, by iteration: y = asinh(ratio·y).
	let y = 10;
	for (let i = 0; i < 60; i++) y = Math.asinh(ratio * y);
	const halfWidth = Math.max(4, Math.ceil(y / (2 * Math.PI * Math.sqrt(stopband ** 2 - passband ** 2))));
	const kernel = { cutoff: 0, halfWidth, beta: 2 * Math.PI * halfWidth * stopband };
	return taperResponse(kernel, passband) * 1e4 < taperResponse(kernel, 0) ? null : kernel;
}

/** Fourier transform of a bare taper at f cycles per sample: what it makes of a tone's amplitude. */
export function taperResponse({ halfWidth, beta }: KaiserKernel, f: number): number {
	const square = beta ** 2 - (2 * Math.PI * halfWidth * f) ** 2;
	const root = Math.sqrt(Math.abs(square));
	const lobe = root === 0 ? 1 : (square > 0 ? Math.sinh(root) : Math.sin(root)) / root;
	return (2 * halfWidth * lobe) / besselI0(beta);
}

/** The kernel as a function of the distance t (samples) from its centre. */
export function kaiserKernelFunction(kernel: KaiserKernel): (t: number) => number {
	const { cutoff, halfWidth, beta } = kernel;
	const whole = besselI0(beta);
	return (t) => {
		const relative = t / halfWidth;
		if (relative <= -1 || relative >= 1) return 0;
		const taper = besselI0(beta * Math.sqrt(1 - relative * relative)) / whole;
		if (cutoff === 0) return taper;
		const x = 2 * cutoff * t;
		const sinc = x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x);
		return 2 * cutoff * sinc * taper;
	};
}
