import type { KernelShape, RawFormat, RowLayout } from './signal-kernels';

/** Bytes that one value takes in a row. */
export const VALUE_BYTES: Record<RawFormat, number> = {
	uint8: 1,
	int16: 2,
	int24: 3,
	int32: 4,
	float32: 4,
	float64: 8
};

/**
 * Holds a decoding request to the buffers it reads from and writes to.
 * throws   RangeError
 */
export function checkRowBounds(shape: KernelShape, layout: RowLayout, count: number, at: number): void {
	const { channelCount, rawCapacity, capacity } = shape;
	if (count * layout.rowBytes > rawCapacity) throw new RangeError('more rows than the raw buffer holds');
	if (at < 0 || at + count > capacity) throw new RangeError('more rows than the samples have room for');
	const last = layout.rowBytes - VALUE_BYTES[layout.format];
	for (let c = 0; c < channelCount; c++) {
		const offset = layout.offsets[c]!;
		if (!(offset >= 0 && offset <= last)) throw new RangeError('a channel lies outside the row');
	}
}
