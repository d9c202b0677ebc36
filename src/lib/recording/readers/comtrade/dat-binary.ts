import { ok, type Result } from '../../../result';
import type { ReadProblem, ReadRemark } from '../../recording';
import { counted, refuse, warning } from '../read-problem';
import type { ComtradeData, ComtradeHeader } from './comtrade-header';

const STAMP_MISSING = 0xffff_ffff;
const INT16_MISSING = -0x8000;
const INT32_MISSING = -0x8000_0000;

export type BinaryFormat = 'BINARY' | 'BINARY32' | 'FLOAT32';

/** Row length: sample number and stamp (4 bytes each), the analogue values, then 16 status channels per word. */
export function binaryRowBytes(format: BinaryFormat, analogueCount: number, statusCount: number): number {
	return 8 + (format === 'BINARY' ? 2 : 4) * analogueCount + 2 * Math.ceil(statusCount / 16);
}

/** What the size and the first bytes of binary data tell. */
export interface BinaryShape {
	rowBytes: number;
	sampleCount: number;
	remarks: ReadRemark[];
}

/** Bytes from the start of the data that `binaryShape` looks at; fewer where the data are shorter. */
export function binaryHeadBytes(rowBytes: number): number {
	return 8 * rowBytes;
}

/**
 * Checks binary data against their header.
 * head        the first `binaryHeadBytes` bytes
 * size_bytes  of all data
 * firstByte   position of the data inside `file`, for sentences
 */
export function binaryShape(
	file: string,
	head: Uint8Array,
	size_bytes: number,
	firstByte: number,
	header: ComtradeHeader,
	format: BinaryFormat
): Result<BinaryShape, ReadProblem> {
	const rowBytes = binaryRowBytes(format, header.analogues.length, header.statusNames.length);
	const sampleCount = Math.floor(size_bytes / rowBytes);
	const layout = `${rowBytes} bytes per sample (${header.analogues.length} analogue and ${header.statusNames.length} status channels, ${format})`;
	if (sampleCount === 0)
		return refuse(
			'dat-empty',
			file,
			`byte ${firstByte}`,
			`${file} holds ${counted(size_bytes, 'byte')} of data from byte ${firstByte} on; at least ${layout} were expected.`
		);
	const view = new DataView(head.buffer, head.byteOffset, head.byteLength);
	const order = checkSampleNumbers(view, rowBytes, sampleCount);
	const announced = header.announced?.sampleCount ?? null;
	const sizeFits = size_bytes === sampleCount * rowBytes && announced === sampleCount;
	if (order !== null && !sizeFits)
		return refuse(
			'dat-layout',
			file,
			`byte ${firstByte + order.row * rowBytes}`,
			`${file}, byte ${firstByte + order.row * rowBytes}: sample number ${order.expected} was expected, but ${order.found} was found; the file does not have ${layout} as ${header.file} describes.`
		);
	const remarks: ReadRemark[] = [];
	const surplus = size_bytes - sampleCount * rowBytes;
	if (surplus > 0)
		remarks.push(
			warning(
				'dat-truncated',
				`${file} ends in the middle of a sample: ${counted(surplus, 'byte')} after byte ${firstByte + sampleCount * rowBytes} do not make up the ${rowBytes} bytes of a sample and were left out.`
			)
		);
	return ok({ rowBytes, sampleCount, remarks });
}

/**
 * Binary data, little-endian: uint32 number, uint32 stamp, then int16, int32 or float32 values per channel and
 * the status words. Lowest negative integers and every non-finite float mark missing values.
 * `firstByte` is the position of `bytes` inside `file`, for sentences.
 */
export function readBinaryData(
	file: string,
	bytes: Uint8Array,
	firstByte: number,
	header: ComtradeHeader,
	format: BinaryFormat
): Result<ComtradeData, ReadProblem> {
	const shape = binaryShape(file, bytes, bytes.length, firstByte, header, format);
	if (!shape.ok) return shape;
	const { rowBytes, sampleCount, remarks } = shape.value;
	const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
	return ok({
		sampleCount,
		raw: header.analogues.map((_, channel) => readChannel(view, format, channel, rowBytes, sampleCount)),
		stamps: readStamps(view, rowBytes, sampleCount),
		remarks
	});
}

/** Time stamp of one row; NaN where it is marked as missing. */
export function stampIn(row: DataView, at: number): number {
	const stamp = row.getUint32(at + 4, true);
	return stamp === STAMP_MISSING ? NaN : stamp;
}

/** The first samples must count upwards by one; a row length that is wrong shows here at once. */
function checkSampleNumbers(
	view: DataView,
	rowBytes: number,
	sampleCount: number
): { row: number; expected: number; found: number } | null {
	const first = view.getUint32(0, true);
	for (let row = 1; row < Math.min(sampleCount, 8); row++) {
		const found = view.getUint32(row * rowBytes, true);
		if (found !== first + row) return { row, expected: first + row, found };
	}
	return null;
}

function readStamps(view: DataView, rowBytes: number, sampleCount: number): Float64Array {
	const stamps = new Float64Array(sampleCount);
	for (let row = 0; row < sampleCount; row++) {
		stamps[row] = stampIn(view, row * rowBytes);
	}
	return stamps;
}

function readChannel(
	view: DataView,
	format: BinaryFormat,
	channel: number,
	rowBytes: number,
	sampleCount: number
): Float64Array {
	const values = new Float64Array(sampleCount);
	let at = 8 + channel * (format === 'BINARY' ? 2 : 4);
	for (let row = 0; row < sampleCount; row++, at += rowBytes) {
		let value: number;
		if (format === 'BINARY') {
			value = view.getInt16(at, true);
			if (value === INT16_MISSING) value = NaN;
		} else if (format === 'BINARY32') {
			value = view.getInt32(at, true);
			if (value === INT32_MISSING) value = NaN;
		} else {
			value = view.getFloat32(at, true);
			if (!Number.isFinite(value)) value = NaN;
		}
		values[row] = value;
	}
	return values;
}
