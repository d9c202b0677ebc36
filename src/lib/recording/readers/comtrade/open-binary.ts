import { ok, type Result } from '../../../result';
import type { RowLayout } from '../../../numerics/kernels/signal-kernels';
import type { CaptureHandle } from '../../capture-handle';
import type { ReadProblem, ReadRemark } from '../../recording';
import type { CaptureSource } from '../../sample-source';
import { parseUnit } from '../../unit-text';
import { buildFrame } from './build-recording';
import type { ComtradeHeader, StampColumn } from './comtrade-header';
import { binaryHeadBytes, binaryRowBytes, binaryShape, stampIn, type BinaryFormat } from './dat-binary';

const RAW_FORMAT = { BINARY: 'int16', BINARY32: 'int32', FLOAT32: 'float32' } as const;
/** Rows of time stamps read at a time, bytes. */
const STAMP_BLOCK_BYTES = 1 << 17;

/**
 * Binary data that stay in their file: only their head and their time stamps are read now, samples when they are analysed.
 * Values become a·x + b in V or A in one step, within 1e-15 of what reading them into memory gives.
 */
export function openBinaryData(
	header: ComtradeHeader,
	data: CaptureHandle,
	remarks: ReadRemark[]
): Result<CaptureSource, ReadProblem> {
	const format = header.dataFormat as BinaryFormat;
	const rowBytes = binaryRowBytes(format, header.analogues.length, header.statusNames.length);
	const head = new Uint8Array(Math.min(data.size_bytes, binaryHeadBytes(rowBytes)));
	data.read(0, head);
	const shape = binaryShape(data.name, head, data.size_bytes, 0, header, format);
	if (!shape.ok) return shape;
	const { sampleCount } = shape.value;
	const frame = buildFrame(
		data.name,
		header,
		{ ...shape.value, stamps: stampsOf(data, rowBytes, sampleCount) },
		remarks
	);
	if (!frame.ok) return frame;
	return ok({
		...frame.value,
		samples: {
			kind: 'rows',
			layout: layoutOf(header, format, rowBytes),
			read: (fromRow, count, into) => data.read(fromRow * rowBytes, into.subarray(0, count * rowBytes)),
			file: data
		}
	});
}

function layoutOf(header: ComtradeHeader, format: BinaryFormat, rowBytes: number): RowLayout {
	const width = format === 'BINARY' ? 2 : 4;
	const scaled = header.analogues.map(({ unit, a, b }) => {
		const { times, over } = parseUnit(unit);
		return { factor: (a * times) / over, addition: (b * times) / over };
	});
	return {
		format: RAW_FORMAT[format],
		rowBytes,
		offsets: scaled.map((_, channel) => 8 + width * channel),
		factors: scaled.map(({ factor }) => factor),
		additions: scaled.map(({ addition }) => addition)
	};
}

/** Time stamps read block by block as they are asked for. */
function stampsOf(data: CaptureHandle, rowBytes: number, sampleCount: number): StampColumn {
	const rowsAtOnce = Math.max(1, Math.floor(STAMP_BLOCK_BYTES / rowBytes));
	const block = new Uint8Array(rowsAtOnce * rowBytes);
	const view = new DataView(block.buffer);
	let held = -1;
	let last = { sample: -1, stamp: NaN };
	return {
		length: sampleCount,
		at(sample) {
			if (sample < 0 || sample >= sampleCount) return undefined;
			// Neighbours are asked for in pairs; the earlier one may lie in the block before.
			if (sample === last.sample) return last.stamp;
			const wanted = Math.floor(sample / rowsAtOnce);
			if (wanted !== held) {
				const from = wanted * rowsAtOnce;
				const count = Math.min(rowsAtOnce, sampleCount - from);
				data.read(from * rowBytes, block.subarray(0, count * rowBytes));
				held = wanted;
			}
			const stamp = stampIn(view, (sample - wanted * rowsAtOnce) * rowBytes);
			last = { sample, stamp };
			return stamp;
		},
		subarray(from, to) {
			const stamps = new Float64Array(to - from);
			held = -1;
			for (let row = from; row < to; row += rowsAtOnce) {
				const count = Math.min(rowsAtOnce, to - row);
				data.read(row * rowBytes, block.subarray(0, count * rowBytes));
				for (let i = 0; i < count; i++) stamps[row - from + i] = stampIn(view, i * rowBytes);
			}
			return stamps;
		}
	};
}
