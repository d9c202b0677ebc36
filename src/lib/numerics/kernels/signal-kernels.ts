import type { KaiserKernel } from '../resample/kaiser-kernel';

/** Sizes of one run of the kernels; fixed once they are made. */
export interface KernelShape {
	channelCount: number;
	/** Samples that the buffer of each channel holds. */
	capacity: number;
	/** Points of a window after interpolation; a power of two. */
	points: number;
	/** Lines 0 … lineCount−1 are kept; ≤ points/2 + 1. */
	lineCount: number;
	/** Interpolation kernel, in units of the sampling interval. */
	kernel: KaiserKernel;
	/** Bytes that `raw` offers for rows still to be decoded; 0 when samples are written directly. */
	rawCapacity: number;
}

export type RawFormat = 'uint8' | 'int16' | 'int24' | 'int32' | 'float32' | 'float64';

/** How samples of several channels lie in rows of bytes, little-endian, one row per sampling instant. */
export interface RowLayout {
	format: RawFormat;
	/** The smallest int16 or int32 is a value like any other, and not the mark of a missing sample. */
	lowestIsValue?: boolean;
	rowBytes: number;
	/** [channelCount] place of each channel's value inside a row, bytes. */
	offsets: readonly number[];
	/** [channelCount] value = factor · raw + offset. */
	factors: readonly number[];
	additions: readonly number[];
}

export interface StretchFigures {
	/** Sum of the squares of the samples. */
	squares: number;
	least: number;
	greatest: number;
}

/**
 * The arithmetic that every sample goes through: decoding, interpolation onto a window, transform, squares.
 * Two implementations keep this contract, one in WebAssembly and one in script; results agree to 1e-12 of the largest line.
 * All buffers belong to the kernels and keep their place for life: write into them and read from them, do not keep copies of views.
 * Positions are sample numbers inside the buffers, not of the capture.
 */
export interface SignalKernels {
	readonly shape: KernelShape;
	/** Samples needed on either side of an instant that is interpolated. */
	readonly guard: number;
	/** [rawCapacity] bytes of rows waiting for `decodeRows`. */
	readonly raw: Uint8Array;
	/** [channelCount][capacity] samples, any unit; NaN marks a missing one. */
	readonly samples: readonly Float64Array[];
	/** [channelCount][points] the window of the last `transformWindow`. */
	readonly windows: readonly Float64Array[];
	/**
	 * [channelCount][2·lineCount] its spectrum, interleaved re, im; convention as in dft/convention.md, without any factor.
	 * With a bare taper (cutoff 0) the taper's droop is divided out here, and stays in `windows`.
	 */
	readonly spectra: readonly Float64Array[];
	/**
	 * Decodes `count` rows from the start of `raw` into the samples of every channel from position `at`.
	 * The smallest int16 or int32, unless `lowestIsValue`, and every float that is not finite mark a missing sample and
	 * become NaN (IEEE C37.111-2013, missing data). Every uint8 and int24 is a value.
	 */
	decodeRows(layout: RowLayout, count: number, at: number): void;
	/** Moves samples [from, from + count) of every channel to the start of its buffer. */
	slide(from: number, count: number): void;
	/**
	 * Interpolates every channel at `start + m·step`, m = 0 … points−1, into `windows` and transforms it into `spectra`.
	 * start ≥ guard; start + (points−1)·step ≤ capacity − 1 − guard. A missing sample makes the channel's spectrum NaN.
	 */
	transformWindow(start: number, step: number): void;
	/** Squares, least and greatest of one channel over positions [from, to); NaN in all three when a sample is missing. */
	stretch(channel: number, from: number, to: number): StretchFigures;
}
