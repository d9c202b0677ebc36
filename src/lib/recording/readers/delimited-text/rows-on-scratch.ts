import type { SampleScratch } from '../../sample-scratch';
import { rowsInFile, type RowSamples } from '../../sample-source';

/** Room of the rows that are handed on together. */
const BUFFER_BYTES = 1 << 20;

/**
 * Samples as rows of doubles on scratch.
 * factors  [channels] from the written value to the base unit
 */
export function rowsOnScratch(channelCount: number, factors: readonly number[], scratch: SampleScratch) {
	const file = scratch.create();
	const rowBytes = 8 * channelCount;
	const buffer = new Float64Array(channelCount * Math.max(1, Math.floor(BUFFER_BYTES / rowBytes)));
	let filled = 0;
	const flush = () => {
		file.append(new Uint8Array(buffer.buffer, 0, filled * 8));
		filled = 0;
	};
	return {
		push(values: Float64Array): void {
			buffer.set(values, filled);
			filled += channelCount;
			if (filled === buffer.length) flush();
		},
		seal(): RowSamples {
			if (filled > 0) flush();
			return rowsInFile(
				{
					format: 'float64',
					rowBytes,
					offsets: factors.map((_, channel) => 8 * channel),
					factors,
					additions: factors.map(() => 0)
				},
				file.seal(),
				0
			);
		}
	};
}
