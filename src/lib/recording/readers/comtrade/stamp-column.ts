import type { CaptureHandle } from '../../capture-handle';
import type { StampColumn } from './comtrade-header';

/** Stamps that lie as float64 in a file, one after the other. */
export function stampsInFile(file: CaptureHandle): StampColumn {
	return {
		length: file.size_bytes / 8,
		subarray(from, to) {
			const stamps = new Float64Array(to - from);
			file.read(8 * from, new Uint8Array(stamps.buffer));
			return stamps;
		}
	};
}

/** One stamp. */
export function stampAt(stamps: StampColumn, sample: number): number {
	return stamps.subarray(sample, sample + 1)[0] as number;
}

/** Stamps compared at a time. */
export const STAMPS_AT_ONCE = 8192;

/** All stamps in order, some at a time; each piece with the sample that it begins at. */
export function* stampBlocks(stamps: StampColumn): Generator<{ from: number; values: Float64Array }> {
	for (let from = 0; from < stamps.length; from += STAMPS_AT_ONCE)
		yield { from, values: stamps.subarray(from, Math.min(stamps.length, from + STAMPS_AT_ONCE)) };
}
