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
	/** Centre of the transition band, cycles per sample; 0 for the taper without one (see designTaperKernel). */
	cutoff: number;
	/** Half of the support, samples; the kernel is 0 outside. */
	halfWidth: number;
	beta: number;
	/** The kernel is this sum of copies of itself, shifted; part of `halfWidth` is for them. Left out: itself. */
	lift?: KernelLift;
}

/** Copies of a kernel, one beside the other, that flatten its response: 1 + 2a·(1 − cos 2πf·spacing), once or twice. */
export interface KernelLift {
	/** Samples between copies. */
	spacing: number;
	/** [m + 1] weight of the middle copy, then of each pair beside it. */
	weights: readonly number[];
}

/** Half of the support of one copy. */
function copyHalfWidth({ halfWidth, lift }: KaiserKernel): number {
	return lift ? halfWidth - (lift.weights.length - 1) * lift.spacing : halfWidth;
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

/** Distances of the copies that are tried, as shares of the period of `passband`. */
const LIFT_SPACINGS = [0.1, 0.13, 0.16];
/**
 * Most that a kernel may droop between dc and the passband's edge. Whatever is not synchronous leaks through the window
 * after the droop and is lifted with the lines where it lands: what the window really shows of it is off by this factor.
 */
const MOST_DROOP = 1.8;
const MOST_HALF_WIDTH = 128;

/**
 * Kernel for spectra whose lines are equalised afterwards: a bare Kaiser taper, and where its droop is deeper than 1.8, the
 * sum of three or five shifted copies, which lifts the upper end. It stops from `stopband` on; what droop is left is known
 * in closed form (taperResponse) and undone line by line (planEqualiser). About half the taps of designKaiserKernel do.
 * passband, stopband  cycles per sample, 0 < passband < stopband
 * attenuation_dB      least ratio of the response at `passband` to any at or above `stopband`
 * returns             null where no lift leaves less droop
 * source              transform pair of the Kaiser window (Kaiser & Schafer, IEEE Trans. ASSP 28(1), 1980; from memory);
 *                     the response is measured in tests/numerics
 */
export function designTaperKernel(
	passband: number,
	stopband: number,
	attenuation_dB: number
): KaiserKernel | null {
	const ratio = 10 ** (attenuation_dB / 20);
	let best: KaiserKernel | null = null;
	for (const times of [0, 1, 2]) {
		for (const share of times === 0 ? [0] : LIFT_SPACINGS) {
			const spacing = share / passband;
			const most = best ? best.halfWidth - 1 : MOST_HALF_WIDTH;
			for (let halfWidth = 4; halfWidth <= most; halfWidth++) {
				const copy = halfWidth - times * spacing;
				if (copy < 2) continue;
				const beta = 2 * Math.PI * copy * stopband;
				// Two to the thousandth: sinh and the Bessel function leave the range of doubles.
				if (beta > 690) break;
				const bare = { cutoff: 0, halfWidth: copy, beta };
				const droop = taperResponse(bare, 0) / taperResponse(bare, passband);
				const amount = times === 0 ? 0 : (droop ** (1 / times) - 1) / (2 - 2 * Math.cos(2 * Math.PI * share));
				const kernel = times === 0 ? bare : { ...bare, halfWidth, lift: liftOf(spacing, amount, times) };
				// Copies raise the stopband by their weights at most.
				const beyond = taperResponse(bare, stopband) * (1 + 4 * amount) ** times;
				if (taperResponse(kernel, passband) < ratio * beyond) continue;
				// A wider taper droops even more.
				if (deepestDroop(kernel, passband) <= MOST_DROOP) best = kernel;
				break;
			}
		}
	}
	return best;
}

/** Weights of (1 + 2a) in the middle and −a on either side, applied once or twice. */
function liftOf(spacing: number, a: number, times: number): KernelLift {
	if (times === 1) return { spacing, weights: [1 + 2 * a, -a] };
	return { spacing, weights: [(1 + 2 * a) ** 2 + 2 * a * a, -2 * a * (1 + 2 * a), a * a] };
}

/** Ratio of the greatest to the least response of the passband. */
function deepestDroop(kernel: KaiserKernel, passband: number): number {
	const responses = Array.from({ length: 33 }, (_, i) => taperResponse(kernel, (passband * i) / 32));
	return Math.max(...responses) / Math.min(...responses);
}

/** Fourier transform of a bare or lifted taper at f cycles per sample: what it makes of a tone's amplitude. */
export function taperResponse(kernel: KaiserKernel, f: number): number {
	const { beta, lift } = kernel;
	const halfWidth = copyHalfWidth(kernel);
	const square = beta ** 2 - (2 * Math.PI * halfWidth * f) ** 2;
	const root = Math.sqrt(Math.abs(square));
	const lobe = root === 0 ? 1 : (square > 0 ? Math.sinh(root) : Math.sin(root)) / root;
	return (2 * halfWidth * lobe * liftAt(lift, f)) / besselI0(beta);
}

function liftAt(lift: KernelLift | undefined, f: number): number {
	if (!lift) return 1;
	return lift.weights.reduce(
		(sum, weight, i) => sum + (i === 0 ? weight : 2 * weight * Math.cos(2 * Math.PI * f * i * lift.spacing)),
		0
	);
}

/** From where on a bare or lifted taper stops, cycles per sample. */
export function taperStopband(kernel: KaiserKernel): number {
	return kernel.beta / (2 * Math.PI * copyHalfWidth(kernel));
}

/** The kernel as a function of the distance t (samples) from its centre. */
export function kaiserKernelFunction(kernel: KaiserKernel): (t: number) => number {
	const { cutoff, beta, lift } = kernel;
	const halfWidth = copyHalfWidth(kernel);
	const whole = besselI0(beta);
	const copyAt = (t: number) => {
		const relative = t / halfWidth;
		if (relative <= -1 || relative >= 1) return 0;
		const taper = besselI0(beta * Math.sqrt(1 - relative * relative)) / whole;
		if (cutoff === 0) return taper;
		const x = 2 * cutoff * t;
		const sinc = x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x);
		return 2 * cutoff * sinc * taper;
	};
	if (!lift) return copyAt;
	return (t) =>
		lift.weights.reduce((sum, weight, i) => {
			const beside = i * lift.spacing;
			return sum + weight * (i === 0 ? copyAt(t) : copyAt(t - beside) + copyAt(t + beside));
		}, 0);
}
