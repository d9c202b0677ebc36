// Decoding, moving and squaring of samples. All addresses are bytes in the one memory; rows are little-endian.

/** Rows whose bytes stay in the first-level cache while every channel takes its values out of them. */
const BLOCK_ROWS: i32 = 64;
/** Bytes of one channel's entry in a decoding table: source and target address (u32 each), factor, addition (f64). */
const ENTRY_BYTES: usize = 24;

export function decodeInt16(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	for (let done = 0; done < count; done += BLOCK_ROWS) {
		const rows = min(BLOCK_ROWS, count - done);
		for (let c = 0; c < channelCount; c++) {
			const entry = table + <usize>c * ENTRY_BYTES;
			const factor = load<f64>(entry, 8);
			const addition = load<f64>(entry, 16);
			let from = <usize>load<u32>(entry) + <usize>done * rowBytes;
			let to = <usize>load<u32>(entry, 4) + (<usize>done << 3);
			for (let row = 0; row < rows; row++) {
				const value = <i32>load<i16>(from);
				store<f64>(to, select<f64>(NaN, factor * <f64>value + addition, value == -32768));
				from += rowBytes;
				to += 8;
			}
		}
	}
}

export function decodeInt32(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	for (let done = 0; done < count; done += BLOCK_ROWS) {
		const rows = min(BLOCK_ROWS, count - done);
		for (let c = 0; c < channelCount; c++) {
			const entry = table + <usize>c * ENTRY_BYTES;
			const factor = load<f64>(entry, 8);
			const addition = load<f64>(entry, 16);
			let from = <usize>load<u32>(entry) + <usize>done * rowBytes;
			let to = <usize>load<u32>(entry, 4) + (<usize>done << 3);
			for (let row = 0; row < rows; row++) {
				const value = load<i32>(from);
				store<f64>(to, select<f64>(NaN, factor * <f64>value + addition, value == i32.MIN_VALUE));
				from += rowBytes;
				to += 8;
			}
		}
	}
}

export function decodeFloat32(table: usize, channelCount: i32, rowBytes: usize, count: i32): void {
	for (let done = 0; done < count; done += BLOCK_ROWS) {
		const rows = min(BLOCK_ROWS, count - done);
		for (let c = 0; c < channelCount; c++) {
			const entry = table + <usize>c * ENTRY_BYTES;
			const factor = load<f64>(entry, 8);
			const addition = load<f64>(entry, 16);
			let from = <usize>load<u32>(entry) + <usize>done * rowBytes;
			let to = <usize>load<u32>(entry, 4) + (<usize>done << 3);
			for (let row = 0; row < rows; row++) {
				const value = load<f32>(from);
				// Neither infinities nor NaN are below infinity.
				store<f64>(to, select<f64>(factor * <f64>value + addition, NaN, abs(value) < <f32>Infinity));
				from += rowBytes;
				to += 8;
			}
		}
	}
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
