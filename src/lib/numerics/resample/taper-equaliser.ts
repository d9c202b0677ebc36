import { ROWS_PER_SAMPLE } from './interpolator';
import { type KaiserKernel, taperResponse, taperStopband } from './kaiser-kernel';

/** Steps of the table from 0 to the kernel's stopband; cubics run between them. */
const STEPS = 8192;

/**
 * Plans the factors that undo the droop of a taper on the lines of a window.
 * kernel   from designTaperKernel; any other needs no factors: they are 1
 * points   of a window
 * gains    [lineCount] receives the factor of each line; NaN for lines in the stopband
 * returns  function to be called with the window's step (samples per point) before `gains` are read
 * error    1e-10 of the factor up to 0.85 of the stopband's edge
 */
export function planEqualiser(
	kernel: KaiserKernel,
	points: number,
	gains: Float64Array
): (step: number) => void {
	gains.fill(1);
	if (kernel.cutoff !== 0) return () => undefined;
	const stopband = taperStopband(kernel);
	// Entry i belongs to frequency (i − 1)·stopband/STEPS.
	const table = Float64Array.from({ length: STEPS + 3 }, (_, i) => {
		const f = ((i - 1) * stopband) / STEPS;
		return 1 / (taperResponse(kernel, f) * blendingResponse(f));
	});
	let known = 0;
	return (step) => {
		if (step === known) return;
		known = step;
		const perLine = STEPS / (points * step * stopband);
		for (let k = 0; k < gains.length; k++) {
			const place = k * perLine;
			const i = place | 0;
			gains[k] = i < STEPS ? cubic(table, i, place - i) : NaN;
		}
	};
}

/** What straight lines between the rows of the interpolator's table make of a tone. */
function blendingResponse(f: number): number {
	const x = (Math.PI * f) / ROWS_PER_SAMPLE;
	return x === 0 ? 1 : (Math.sin(x) / x) ** 2;
}

/** Lagrange's cubic through entries at … at+3, between the middle two. */
function cubic(table: Float64Array, at: number, t: number): number {
	const a = table[at]!;
	const b = table[at + 1]!;
	const c = table[at + 2]!;
	const d = table[at + 3]!;
	const inner = b + t * (c - b);
	// What the cubic adds to the straight line, by second differences at both ends.
	return inner + ((t * (t - 1)) / 6) * ((2 - t) * (a - 2 * b + c) + (1 + t) * (b - 2 * c + d));
}
