import FFT from 'fft.js';

/** The little of the transform engine that is used; its own types are looser than the truth. */
interface TransformEngine {
	createComplexArray(): number[];
	realTransform(out: number[], data: Float64Array): void;
	transform(out: number[], data: number[]): void;
	inverseTransform(out: number[], data: number[]): void;
}

/** Tables and buffers for one transform length. Make it once, execute it often. */
export interface RealDftPlan {
	/** N, number of real points. */
	readonly length: number;
	/** floor(N/2) + 1 lines are valid after execution. */
	readonly lineCount: number;
	/** Interleaved re, im of lines 0 … lineCount−1; overwritten by each execution. Longer than 2·lineCount. */
	readonly spectrum: number[];
	/** Transforms `samples[0 … N−1]` into `spectrum`. */
	readonly execute: (samples: Float64Array) => void;
}

/**
 * Plans the DFT of N real points, convention as in convention.md.
 * length   N ≥ 2, any whole number; powers of two run on the radix-4 engine directly, others as a chirp convolution
 * returns  plan with its own buffers (not to be shared between interleaved uses)
 * error    about 1e-15 relative to the largest line for powers of two, 1e-13 otherwise
 * source   chirp form: Bluestein, IEEE Trans. Audio Electroacoustics 18(4), 1970
 */
export function planRealDft(length: number): RealDftPlan {
	if (!Number.isInteger(length) || length < 2) {
		throw new RangeError(`DFT length must be a whole number of at least 2, not ${length}`);
	}
	return (length & (length - 1)) === 0 ? planPowerOfTwo(length) : planChirp(length);
}

/** Runs the plan on the first N values of `samples`; the result is in `plan.spectrum`. */
export function executeRealDft(plan: RealDftPlan, samples: Float64Array): void {
	plan.execute(samples);
}

function planPowerOfTwo(length: number): RealDftPlan {
	const engine: TransformEngine = new FFT(length);
	const spectrum = engine.createComplexArray();
	return {
		length,
		lineCount: length / 2 + 1,
		spectrum,
		execute: (samples) => engine.realTransform(spectrum, samples)
	};
}

function planChirp(length: number): RealDftPlan {
	let padded = 2;
	while (padded < 2 * length - 1) padded *= 2;
	const engine: TransformEngine = new FFT(padded);
	const cos = new Float64Array(length);
	const sin = new Float64Array(length);
	for (let n = 0; n < length; n++) {
		// n² is reduced modulo 2N first: the angle stays small and exact for long transforms.
		const angle = (Math.PI * ((n * n) % (2 * length))) / length;
		cos[n] = Math.cos(angle);
		sin[n] = Math.sin(angle);
	}
	const work = engine.createComplexArray();
	const transformed = engine.createComplexArray();
	const chirp = engine.createComplexArray();
	for (let n = 0; n < length; n++) {
		work[2 * n] = cos[n]!;
		work[2 * n + 1] = sin[n]!;
		if (n > 0) {
			work[2 * (padded - n)] = cos[n]!;
			work[2 * (padded - n) + 1] = sin[n]!;
		}
	}
	engine.transform(chirp, work);
	const lineCount = Math.floor(length / 2) + 1;
	const spectrum = engine.createComplexArray();

	function execute(samples: Float64Array): void {
		work.fill(0);
		for (let n = 0; n < length; n++) {
			work[2 * n] = samples[n]! * cos[n]!;
			work[2 * n + 1] = -samples[n]! * sin[n]!;
		}
		engine.transform(transformed, work);
		for (let k = 0; k < 2 * padded; k += 2) {
			const re = transformed[k]! * chirp[k]! - transformed[k + 1]! * chirp[k + 1]!;
			const im = transformed[k]! * chirp[k + 1]! + transformed[k + 1]! * chirp[k]!;
			transformed[k] = re;
			transformed[k + 1] = im;
		}
		engine.inverseTransform(work, transformed);
		for (let k = 0; k < lineCount; k++) {
			const re = work[2 * k]!;
			const im = work[2 * k + 1]!;
			spectrum[2 * k] = re * cos[k]! + im * sin[k]!;
			spectrum[2 * k + 1] = im * cos[k]! - re * sin[k]!;
		}
	}
	return { length, lineCount, spectrum, execute };
}
