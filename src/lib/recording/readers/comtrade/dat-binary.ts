import { ok, type Result } from '../../../result';
import type { RowLayout } from '../../../numerics/kernels/signal-kernels';
import type { ReadProblem, ReadRemark } from '../../recording';
import { rowsInFile } from '../../sample-source';
import { parseUnit } from '../../unit-text';
import { counted, refuse, warning } from '../read-problem';
import { BinaryRows } from './binary-rows';
import type { ComtradeData, ComtradeDataFormat, ComtradeHeader } from './comtrade-header';
import { headOf, type DataPart } from './data-part';

export type BinaryFormat = Exclude<ComtradeDataFormat, 'ASCII'>;

const RAW_FORMAT = { BINARY: 'int16', BINARY32: 'int32', FLOAT32: 'float32' } as const;

/** Row length: sample number and stamp (4 bytes each), the analogue values, then 16 status channels per word. */
export function binaryRowBytes(format: BinaryFormat, analogueCount: number, statusCount: number): number {
	return 8 + (format === 'BINARY' ? 2 : 4) * analogueCount + 2 * Math.ceil(statusCount / 16);
}

/**
 * Binary data, little-endian: uint32 number, uint32 stamp, then int16, int32 or float32 values per channel and the status
 * words. They stay in their file. Lowest negative integers and every non-finite float mark missing values.
 * Values become a·x + b in V or A in one step, within 1e-15 of the two steps of the standard's own formula.
 */
export function readBinaryData(
	part: DataPart,
	header: ComtradeHeader,
	format: BinaryFormat
): Result<ComtradeData, ReadProblem> {
	const { file, start, end } = part;
	const rowBytes = binaryRowBytes(format, header.analogues.length, header.statuses.length);
	const size_bytes = end - start;
	const sampleCount = Math.floor(size_bytes / rowBytes);
	const layout = `${rowBytes} bytes per sample (${header.analogues.length} analogue and ${header.statuses.length} status channels, ${format})`;
	if (sampleCount === 0)
		return refuse(
			'dat-empty',
			file.name,
			`byte ${start}`,
			`${file.name} holds ${counted(size_bytes, 'byte')} of data from byte ${start} on; at least ${layout} were expected.`
		);
	const order = checkSampleNumbers(headOf(part, 8 * rowBytes), rowBytes, sampleCount);
	const sizeFits =
		size_bytes === sampleCount * rowBytes && (header.announced?.sampleCount ?? null) === sampleCount;
	if (order !== null && !sizeFits)
		return refuse(
			'dat-layout',
			file.name,
			`byte ${start + order.row * rowBytes}`,
			`${file.name}, byte ${start + order.row * rowBytes}: sample number ${order.expected} was expected, but ${order.found} was found; the file does not have ${layout} as ${header.file} describes.`
		);
	const remarks: ReadRemark[] = [];
	const surplus = size_bytes - sampleCount * rowBytes;
	if (surplus > 0)
		remarks.push(
			warning(
				'dat-truncated',
				`${file.name} ends in the middle of a sample: ${counted(surplus, 'byte')} after byte ${start + sampleCount * rowBytes} do not make up the ${rowBytes} bytes of a sample and were left out.`
			)
		);
	const rows = new BinaryRows(part, format, header, rowBytes, sampleCount);
	return ok({
		sampleCount,
		stamps: rows,
		samples: rowsInFile(layoutOf(header, format, rowBytes), file, start),
		survey: () => rows.survey(),
		remarks
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

/** The first samples must count upwards by one; a row length that is wrong shows here at once. */
function checkSampleNumbers(
	head: Uint8Array,
	rowBytes: number,
	sampleCount: number
): { row: number; expected: number; found: number } | null {
	const view = new DataView(head.buffer, head.byteOffset, head.byteLength);
	const first = view.getUint32(0, true);
	for (let row = 1; row < Math.min(sampleCount, 8); row++) {
		const found = view.getUint32(row * rowBytes, true);
		if (found !== first + row) return { row, expected: first + row, found };
	}
	return null;
}
