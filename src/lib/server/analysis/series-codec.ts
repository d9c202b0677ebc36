import { endianness } from 'node:os';
import { ORDER_STRIDE, type IntervalKind, type IntervalSeries } from '../../harmonics/intervals';
import type { AnalysisSeriesRow } from '../db/rows';

// Blobs are little-endian; a typed array has the machine's order, so one is the other only where they agree.
if (endianness() !== 'LE') throw new Error('analysis series are kept little-endian: this machine is not');

/** Bytes of a float64 array, without copying. */
export function float64ToBuffer(values: Float64Array): Buffer {
	return Buffer.from(values.buffer, values.byteOffset, values.byteLength);
}

/** [length/8] values. A buffer from the database need not be aligned to eight bytes, so the bytes are copied. */
export function bufferToFloat64(bytes: Uint8Array): Float64Array {
	if (bytes.byteLength % 8 !== 0)
		throw new Error(`a float64 array cannot have ${bytes.byteLength} bytes: the stored series is damaged`);
	const copy = new Float64Array(bytes.byteLength / 8);
	new Uint8Array(copy.buffer).set(bytes);
	return copy;
}

/** [length/4] values; see bufferToFloat64. */
export function bufferToFloat32(bytes: Uint8Array): Float32Array {
	if (bytes.byteLength % 4 !== 0)
		throw new Error(`a float32 array cannot have ${bytes.byteLength} bytes: the stored samples are damaged`);
	const copy = new Float32Array(bytes.byteLength / 4);
	new Uint8Array(copy.buffer).set(bytes);
	return copy;
}

/** A float64 array at half its size, for what is shown and not judged: seven digits. */
export function float32Buffer(values: Float64Array): Buffer {
	const narrow = Float32Array.from(values);
	return Buffer.from(narrow.buffer, narrow.byteOffset, narrow.byteLength);
}

/** [length] values that were stored with four or with eight bytes each. */
export function bufferToFloats(bytes: Uint8Array, length: number): Float64Array {
	if (bytes.byteLength === 8 * length) return bufferToFloat64(bytes);
	if (bytes.byteLength !== 4 * length)
		throw new Error(`${bytes.byteLength} bytes do not hold ${length} values: the stored series is damaged`);
	return Float64Array.from(bufferToFloat32(bytes));
}

export function bytesToBuffer(values: Uint8Array): Buffer {
	return Buffer.from(values.buffer, values.byteOffset, values.byteLength);
}

export type SeriesColumns = Pick<
	AnalysisSeriesRow,
	| 'quantity'
	| 'phase'
	| 'interval_count'
	| 'starts_ms'
	| 'lengths_s'
	| 'rms'
	| 'frequency_hz'
	| 'subgroups'
	| 'flagged'
> & { interval: IntervalKind };

/** A series as the columns of one row of analysis_series. */
export function encodeSeries(series: IntervalSeries): SeriesColumns {
	return {
		quantity: series.quantity,
		phase: series.phase,
		interval: series.interval,
		interval_count: series.starts_ms.length,
		starts_ms: float64ToBuffer(series.starts_ms),
		lengths_s: float64ToBuffer(series.lengths_s),
		rms: float64ToBuffer(series.rms),
		frequency_hz: float64ToBuffer(series.frequency_Hz),
		subgroups: float64ToBuffer(series.subgroups),
		flagged: bytesToBuffer(series.flagged)
	};
}

/** The series of one row. Throws when the arrays do not have the length that the row states. */
export function decodeSeries(row: SeriesColumns): IntervalSeries {
	const n = row.interval_count;
	const series: IntervalSeries = {
		quantity: row.quantity,
		phase: row.phase,
		interval: row.interval,
		starts_ms: bufferToFloat64(row.starts_ms),
		lengths_s: bufferToFloat64(row.lengths_s),
		rms: bufferToFloat64(row.rms),
		frequency_Hz: bufferToFloat64(row.frequency_hz),
		subgroups: bufferToFloat64(row.subgroups),
		flagged: new Uint8Array(row.flagged)
	};
	const lengths = [series.starts_ms, series.lengths_s, series.rms, series.frequency_Hz, series.flagged].map(
		(array) => array.length
	);
	if (lengths.some((length) => length !== n) || series.subgroups.length !== n * ORDER_STRIDE)
		throw new Error(
			`stored series ${row.quantity} ${row.phase} ${row.interval} does not hold ${n} intervals`
		);
	return series;
}
