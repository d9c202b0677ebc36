import type { RawFormat, RowLayout } from './signal-kernels';

/** How one value is taken out of a row; little-endian. */
const TAKE: Record<RawFormat, (row: DataView, at: number) => number> = {
	uint8: (row, at) => row.getUint8(at),
	int16: (row, at) => row.getInt16(at, true),
	int24: (row, at) => row.getUint16(at, true) + 65_536 * row.getInt8(at + 2),
	int32: (row, at) => row.getInt32(at, true),
	float32: (row, at) => row.getFloat32(at, true),
	float64: (row, at) => row.getFloat64(at, true)
};

/** The lowest value where it marks a missing sample; NaN, which equals nothing, elsewhere. */
function missingMark({ format, lowestIsValue }: RowLayout): number {
	if (lowestIsValue) return NaN;
	return format === 'int16' ? -(2 ** 15) : format === 'int32' ? -(2 ** 31) : NaN;
}

/**
 * Decodes values of one channel, in plain script.
 * view  rows of bytes, the first one at `view`'s start
 * into  [≥ at + count] takes factor · raw + addition, or NaN where the sample is missing
 */
export function decodeChannel(
	view: DataView,
	layout: RowLayout,
	channel: number,
	count: number,
	into: Float64Array,
	at: number
): void {
	const take = TAKE[layout.format];
	const mark = missingMark(layout);
	const factor = layout.factors[channel]!;
	const addition = layout.additions[channel]!;
	let place = layout.offsets[channel]!;
	for (let row = 0; row < count; row++, place += layout.rowBytes) {
		const value = take(view, place);
		into[at + row] = value === mark || !Number.isFinite(value) ? NaN : factor * value + addition;
	}
}
