import { type KaiserKernel, kaiserKernelFunction } from './kaiser-kernel';

/** Rows of the table between one sample and the next; lines between rows are straight. */
export const ROWS_PER_SAMPLE = 2048;

/** A kernel laid out as rows of weights, one row per fraction of a sampling interval. */
export interface Interpolator {
	/** Weights per output point. */
	readonly taps: number;
	/** Samples needed on either side of an output instant; windows have to keep this far from the record's ends. */
	readonly guard: number;
	/** [(ROWS_PER_SAMPLE + 1) × taps] row r holds the weights for fraction r/ROWS_PER_SAMPLE. */
	readonly rows: Float64Array;
	/** [taps] weights of the point in hand. */
	readonly weights: Float64Array;
}

/**
 * Lays a kernel out for band-limited interpolation.
 * error    straight lines between 2048 rows add at most (2π·cutoff)²/(8·2048²), below 3e-7 of the signal
 */
export function planInterpolator(kernel: KaiserKernel): Interpolator {
	const taps = 2 * kernel.halfWidth;
	return { taps, guard: kernel.halfWidth, rows: tableOf(kernel), weights: new Float64Array(taps) };
}

/** Tables are costly to compute and never written to; captures analysed one after the other mostly need the same one. */
const tables = new Map<string, Float64Array>();
const MOST_TABLES = 8;

function tableOf(kernel: KaiserKernel): Float64Array {
	const key = JSON.stringify(kernel);
	const known = tables.get(key);
	if (known) return known;
	const taps = 2 * kernel.halfWidth;
	const rows = new Float64Array((ROWS_PER_SAMPLE + 1) * taps);
	const valueAt = kaiserKernelFunction(kernel);
	// The kernel is even: the second half of the table is the first, read backwards.
	for (let i = 0; i < (ROWS_PER_SAMPLE / 2 + 1) * taps; i++) {
		const fraction = Math.floor(i / taps) / ROWS_PER_SAMPLE;
		rows[i] = valueAt((i % taps) - kernel.halfWidth + 1 - fraction);
		rows[rows.length - 1 - i] = rows[i]!;
	}
	if (tables.size >= MOST_TABLES) tables.clear();
	tables.set(key, rows);
	return rows;
}

/**
 * Values of several channels at evenly spaced instants between their samples.
 * channels  [c][n] samples; all share one time base
 * start     first instant, in sample numbers from index 0 of the channels; start ≥ guard
 * step      spacing of instants in samples; the last instant must be ≤ n − 1 − guard
 * count     number of instants
 * outputs   [c][≥ count] receives the values
 * error     passband ripple and image rejection of the kernel plus the table's (see planInterpolator)
 */
export function interpolateEvenly(
	plan: Interpolator,
	channels: readonly Float64Array[],
	start: number,
	step: number,
	count: number,
	outputs: readonly Float64Array[]
): void {
	const { taps, rows, weights } = plan;
	const reach = plan.guard - 1;
	for (let m = 0; m < count; m++) {
		const position = start + m * step;
		const whole = Math.floor(position);
		const place = (position - whole) * ROWS_PER_SAMPLE;
		const row = Math.floor(place);
		const blend = place - row;
		const at = row * taps;
		for (let tap = 0; tap < taps; tap++) {
			const lower = rows[at + tap]!;
			weights[tap] = lower + blend * (rows[at + taps + tap]! - lower);
		}
		const from = whole - reach;
		for (let c = 0; c < channels.length; c++) {
			outputs[c]![m] = weightedSum(channels[c]!, from, weights, taps);
		}
	}
}

function weightedSum(samples: Float64Array, from: number, weights: Float64Array, taps: number): number {
	// Two accumulators: the additions of one do not have to wait for those of the other. taps is even.
	let even = 0;
	let odd = 0;
	for (let tap = 0; tap < taps; tap += 2) {
		even += samples[from + tap]! * weights[tap]!;
		odd += samples[from + tap + 1]! * weights[tap + 1]!;
	}
	return even + odd;
}
