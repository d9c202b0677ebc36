// Decoding, moving and squaring of samples. All addresses are bytes in the one memory; rows are little-endian.

/** Rows whose bytes stay in the first-level cache while every channel takes its values out of them; even. */
const BLOCK_ROWS: i32 = 64;
/** Bytes of one channel's entry in a decoding table: source and target address (u32 each), factor, addition (f64). */
const ENTRY_BYTES: usize = 24;
/** Exponent of a f32 that is infinite or no number. */
const NOT_FINITE: i32 = 0x7f800000;

@inline
function isMissing<T>(value: T): bool {
	if (isFloat<T>()) return (reinterpret<i32>(<f32>value) & NOT_FINITE) == NOT_FINITE;
	return value == <T>(sizeof<T>() == 2 ? -32768 : i32.MIN_VALUE);
}

/** Four neighbouring values of type T as lanes of 32 bits. */
@inline
function loadFour<T>(from: usize): v128 {
	return sizeof<T>() == 2 ? v128.load16x4_s(from) : v128.load(from);
}

/** All ones in the lanes that hold no value. */
@inline
function missingLanes<T>(lanes: v128): v128 {
	if (isFloat<T>()) {
		const exponent = i32x4.splat(NOT_FINITE);
		return i32x4.eq(v128.and(lanes, exponent), exponent);
	}
	return i32x4.eq(lanes, i32x4.splat(sizeof<T>() == 2 ? -32768 : i32.MIN_VALUE));
}

/** Lanes 0 and 1 as f64. */
@inline
function widened<T>(lanes: v128): v128 {
	return isFloat<T>() ? f64x2.promote_low_f32x4(lanes) : f64x2.convert_low_i32x4_s(lanes);
}

/** factor · lanes + addition of lanes 0 and 1. All ones, the mark of a missing value, are a NaN as well. */
@inline
function scaled<T>(lanes: v128, missing: v128, factors: v128, additions: v128): v128 {
	const values = f64x2.add(f64x2.mul(factors, widened<T>(lanes)), additions);
	return v128.or(values, i64x2.extend_low_i32x4_s(missing));
}

/** Lanes 2 and 3 moved to lanes 0 and 1. */
@inline
function upper(lanes: v128): v128 {
	return v128.shuffle<i64>(lanes, lanes, 1, 1);
}

@inline
function pairAt(entry: usize): v128 {
	return v128.load64_lane(entry + ENTRY_BYTES, v128.load64_splat(entry), 1);
}

/** Two rows of two channels, turned round: lane 0 is the earlier row. */
@inline
function storeTwoRows(first: usize, second: usize, earlier: v128, later: v128): void {
	v128.store(first, v128.shuffle<f64>(earlier, later, 0, 2));
	v128.store(second, v128.shuffle<f64>(earlier, later, 1, 3));
}

/** Rows [done, done + rows) of one channel. */
function decodeOne<T>(entry: usize, rowBytes: usize, done: i32, rows: i32): void {
	const factor = load<f64>(entry, 8);
	const addition = load<f64>(entry, 16);
	let from = <usize>load<u32>(entry) + <usize>done * rowBytes;
	let to = <usize>load<u32>(entry, 4) + (<usize>done << 3);
	for (const end = to + (<usize>rows << 3); to < end; to += 8, from += rowBytes) {
		const value = load<T>(from);
		store<f64>(to, isMissing<T>(value) ? NaN : factor * <f64>value + addition);
	}
}

/** Rows [done, done + rows) of four channels whose values are neighbours; `rows` is even. */
function decodeFour<T>(entry: usize, rowBytes: usize, done: i32, rows: i32): void {
	const lowFactors = pairAt(entry + 8);
	const lowAdditions = pairAt(entry + 16);
	const highFactors = pairAt(entry + 2 * ENTRY_BYTES + 8);
	const highAdditions = pairAt(entry + 2 * ENTRY_BYTES + 16);
	const offset = <usize>done << 3;
	let a = <usize>load<u32>(entry, 4) + offset;
	let b = <usize>load<u32>(entry + ENTRY_BYTES, 4) + offset;
	let c = <usize>load<u32>(entry + 2 * ENTRY_BYTES, 4) + offset;
	let d = <usize>load<u32>(entry + 3 * ENTRY_BYTES, 4) + offset;
	let from = <usize>load<u32>(entry) + <usize>done * rowBytes;
	const end = a + (<usize>rows << 3);
	for (; a < end; a += 16, b += 16, c += 16, d += 16) {
		const one = loadFour<T>(from);
		const two = loadFour<T>(from + rowBytes);
		const oneMissing = missingLanes<T>(one);
		const twoMissing = missingLanes<T>(two);
		storeTwoRows(
			a,
			b,
			scaled<T>(one, oneMissing, lowFactors, lowAdditions),
			scaled<T>(two, twoMissing, lowFactors, lowAdditions)
		);
		storeTwoRows(
			c,
			d,
			scaled<T>(upper(one), upper(oneMissing), highFactors, highAdditions),
			scaled<T>(upper(two), upper(twoMissing), highFactors, highAdditions)
		);
		from += 2 * rowBytes;
	}
}

/** Whether the values of the four channels from this entry on follow each other in the row. */
@inline
function areNeighbours<T>(entry: usize): bool {
	const first = load<u32>(entry);
	return (
		load<u32>(entry + ENTRY_BYTES) == first + sizeof<T>() &&
		load<u32>(entry + 2 * ENTRY_BYTES) == first + 2 * sizeof<T>() &&
		load<u32>(entry + 3 * ENTRY_BYTES) == first + 3 * sizeof<T>()
	);
}

@inline
function decode<T>(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	for (let done = 0; done < count; done += BLOCK_ROWS) {
		const rows = min(BLOCK_ROWS, count - done);
		const even = rows & ~1;
		let entry = table;
		const end = table + <usize>channelCount * ENTRY_BYTES;
		while (entry < end) {
			if (entry + 4 * ENTRY_BYTES <= end && areNeighbours<T>(entry)) {
				decodeFour<T>(entry, rowBytes, done, even);
				const after = entry + 4 * ENTRY_BYTES;
				for (; entry < after; entry += ENTRY_BYTES) {
					if (even < rows) decodeOne<T>(entry, rowBytes, done + even, 1);
				}
			} else {
				decodeOne<T>(entry, rowBytes, done, rows);
				entry += ENTRY_BYTES;
			}
		}
	}
}

export function decodeInt16(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	decode<i16>(table, channelCount, rowBytes, count);
}

export function decodeInt32(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	decode<i32>(table, channelCount, rowBytes, count);
}

export function decodeFloat32(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	decode<f32>(table, channelCount, rowBytes, count);
}

/**
 * Formats that recorders of power write seldom, one channel after the other. An integer of 24 bits is read as one of 32 that
 * begins a byte (`before`) earlier and is moved down by `shift` bits; the raw buffer is not the first thing in memory.
 */
@inline
function decodePlain<T>(
	table: usize,
	channelCount: i32,
	rowBytes: usize,
	count: i32,
	before: usize,
	shift: i32
): void {
	const end = table + <usize>channelCount * ENTRY_BYTES;
	for (let done = 0; done < count; done += BLOCK_ROWS) {
		const rows = min(BLOCK_ROWS, count - done);
		for (let entry = table; entry < end; entry += ENTRY_BYTES) {
			const factor = load<f64>(entry, 8);
			const addition = load<f64>(entry, 16);
			let from = <usize>load<u32>(entry) + <usize>done * rowBytes - before;
			let to = <usize>load<u32>(entry, 4) + (<usize>done << 3);
			for (const stop = to + (<usize>rows << 3); to < stop; to += 8, from += rowBytes) {
				if (isFloat<T>()) {
					const value = <f64>load<T>(from);
					store<f64>(to, isFinite(value) ? factor * value + addition : NaN);
				} else store<f64>(to, factor * <f64>(<i32>load<T>(from) >> shift) + addition);
			}
		}
	}
}

export function decodeUint8(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	decodePlain<u8>(table, channelCount, rowBytes, count, 0, 0);
}

export function decodeWholeInt16(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	decodePlain<i16>(table, channelCount, rowBytes, count, 0, 0);
}

export function decodeInt24(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	decodePlain<i32>(table, channelCount, rowBytes, count, 1, 8);
}

export function decodeWholeInt32(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	decodePlain<i32>(table, channelCount, rowBytes, count, 0, 0);
}

export function decodeFloat64(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	decodePlain<f64>(table, channelCount, rowBytes, count, 0, 0);
}

/** Moves `bytes` bytes from `offset` to the start of each channel's buffer. */
export function slide(samples: usize, stride: usize, channelCount: i32, offset: usize, bytes: usize): void {
	for (let c = 0; c < channelCount; c++) {
		memory.copy(samples, samples + offset, bytes);
		samples += stride;
	}
}

/** Sum of squares, least and greatest of the f64 in [from, to), stored as three f64 at `result`. */
export function stretch(from: usize, to: usize, result: usize): void {
	let sum0 = f64x2.splat(0);
	let sum1 = f64x2.splat(0);
	let sum2 = f64x2.splat(0);
	let sum3 = f64x2.splat(0);
	// A missing sample shows in the sum; the plain minimum and maximum may then give anything.
	let least0 = f64x2.splat(Infinity);
	let least1 = least0;
	let greatest0 = f64x2.splat(-Infinity);
	let greatest1 = greatest0;
	while (from + 64 <= to) {
		const a = v128.load(from);
		const b = v128.load(from, 16);
		const c = v128.load(from, 32);
		const d = v128.load(from, 48);
		sum0 = f64x2.add(sum0, f64x2.mul(a, a));
		sum1 = f64x2.add(sum1, f64x2.mul(b, b));
		sum2 = f64x2.add(sum2, f64x2.mul(c, c));
		sum3 = f64x2.add(sum3, f64x2.mul(d, d));
		least0 = f64x2.pmin(least0, f64x2.pmin(a, b));
		least1 = f64x2.pmin(least1, f64x2.pmin(c, d));
		greatest0 = f64x2.pmax(greatest0, f64x2.pmax(a, b));
		greatest1 = f64x2.pmax(greatest1, f64x2.pmax(c, d));
		from += 64;
	}
	const sums = f64x2.add(f64x2.add(sum0, sum1), f64x2.add(sum2, sum3));
	const leasts = f64x2.pmin(least0, least1);
	const greatests = f64x2.pmax(greatest0, greatest1);
	let squares = f64x2.extract_lane(sums, 0) + f64x2.extract_lane(sums, 1);
	let least = min(f64x2.extract_lane(leasts, 0), f64x2.extract_lane(leasts, 1));
	let greatest = max(f64x2.extract_lane(greatests, 0), f64x2.extract_lane(greatests, 1));
	while (from < to) {
		const value = load<f64>(from);
		squares += value * value;
		least = min(least, value);
		greatest = max(greatest, value);
		from += 8;
	}
	store<f64>(result, squares);
	store<f64>(result, least, 8);
	store<f64>(result, greatest, 16);
}
