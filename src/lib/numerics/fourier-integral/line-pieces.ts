/**
 * The straight pieces between the instants of a sampled function inside a span; the first and last are cut at its ends.
 * What depends on time alone: made once for all functions sampled at the same instants.
 */
export interface LinePieces {
	count: number;
	/** Index of the instant at or before the start of the span. */
	firstPoint: number;
	/** Start of the span; `middles` count from here, so that long records keep their digits. */
	from: number;
	/** [count] middle of each piece after `from`. */
	middles: Float64Array;
	/** [count] > 0, unit of time. */
	lengths: Float64Array;
	/** Share of the first and last whole interval where the span begins and ends, 0 … 1. */
	head: number;
	tail: number;
}

/** A function on such pieces: on each it runs from middle − rise to middle + rise. */
export interface PieceValues {
	/** [count] value in the middle of each piece; NaN where a point of it is missing. */
	middles: Float64Array;
	/** [count] half of the rise along each piece. */
	rises: Float64Array;
}

/**
 * Cuts the span [from, to] at the instants inside it.
 * times    [n ≥ 2] strictly ascending, any unit of time
 * from,to  times[0] ≤ from < to ≤ times[n − 1]
 */
export function cutPieces(times: Float64Array, from: number, to: number): LinePieces {
	const firstPoint = Math.min(times.length - 2, lastAtOrBefore(times, from));
	let lastPoint = lastAtOrBefore(times, to);
	if (times[lastPoint]! < to) lastPoint++;
	const count = lastPoint - firstPoint;
	const middles = new Float64Array(count);
	const lengths = new Float64Array(count);
	for (let p = 0; p < count; p++) {
		const start = p === 0 ? from : times[firstPoint + p]!;
		const end = p === count - 1 ? to : times[firstPoint + p + 1]!;
		middles[p] = (start - from + (end - from)) / 2;
		lengths[p] = end - start;
	}
	return {
		count,
		firstPoint,
		from,
		middles,
		lengths,
		head: shareAt(times, firstPoint, from),
		tail: shareAt(times, lastPoint - 1, to)
	};
}

/** values  [n] at the instants that the pieces were cut from; NaN = missing */
export function valuesOnPieces(pieces: LinePieces, values: Float64Array): PieceValues {
	const { count, firstPoint, head, tail } = pieces;
	const middles = new Float64Array(count);
	const rises = new Float64Array(count);
	for (let p = 0; p < count; p++) {
		const left = values[firstPoint + p]!;
		const right = values[firstPoint + p + 1]!;
		const start = p === 0 ? left + head * (right - left) : left;
		const end = p === count - 1 ? left + tail * (right - left) : right;
		middles[p] = (start + end) / 2;
		rises[p] = (end - start) / 2;
	}
	return { middles, rises };
}

/** Index of the last instant that is not after `time`; 0 where there is none. */
export function lastAtOrBefore(times: Float64Array, time: number): number {
	let low = 0;
	let high = times.length - 1;
	while (low < high) {
		const middle = (low + high + 1) >> 1;
		if (times[middle]! <= time) low = middle;
		else high = middle - 1;
	}
	return low;
}

function shareAt(times: Float64Array, point: number, time: number): number {
	const left = times[point]!;
	return (time - left) / (times[point + 1]! - left);
}

/** ∫ x dt over the span; exact. Unit of the values times that of time; NaN when a point is missing. */
export function integralOf(pieces: LinePieces, values: PieceValues): number {
	let sum = 0;
	for (let p = 0; p < pieces.count; p++) sum += pieces.lengths[p]! * values.middles[p]!;
	return sum;
}

/** ∫ x·y dt over the span, exact; x = y gives the integral of the square. NaN when a point of either is missing. */
export function productIntegral(pieces: LinePieces, x: PieceValues, y: PieceValues): number {
	let sum = 0;
	for (let p = 0; p < pieces.count; p++) {
		sum += pieces.lengths[p]! * (x.middles[p]! * y.middles[p]! + (x.rises[p]! * y.rises[p]!) / 3);
	}
	return sum;
}

/**
 * The function read off its straight lines on an even grid.
 * times, values  [n ≥ 2] instants, strictly ascending, and values there; NaN = missing
 * start, step    of the grid; it must lie within the instants
 * returns        [count]
 */
export function readOnGrid(
	times: Float64Array,
	values: Float64Array,
	start: number,
	step: number,
	count: number
): Float64Array {
	const read = new Float64Array(count);
	let point = lastAtOrBefore(times, start);
	for (let i = 0; i < count; i++) {
		const time = start + i * step;
		while (point < times.length - 2 && times[point + 1]! <= time) point++;
		const left = values[point]!;
		read[i] = left + shareAt(times, point, time) * (values[point + 1]! - left);
	}
	return read;
}
