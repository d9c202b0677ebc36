// Band-limited interpolation of several channels with one set of weights per output point.

/** Rows of the weight table between one sample and the next, as in resample/interpolator.ts. */
const ROWS_PER_SAMPLE: f64 = 2048;

/** Even and odd taps of two channels, added up: lane 0 belongs to `a`, lane 1 to `b`. */
@inline
function totals(a: v128, b: v128): v128 {
	return f64x2.add(v128.shuffle<f64>(a, b, 0, 2), v128.shuffle<f64>(a, b, 1, 3));
}

/**
 * Values of all channels at start + m·step, m = 0 … count−1.
 * rows      weight table, taps f64 per row
 * weights   room for taps f64
 * samples   first channel's samples, the next `sampleStride` bytes further; windows likewise
 * halfWidth half the number of taps
 */
export function interpolate(
	rows: usize,
	weights: usize,
	halfWidth: i32,
	samples: usize,
	sampleStride: usize,
	windows: usize,
	windowStride: usize,
	channelCount: i32,
	start: f64,
	step: f64,
	count: i32
): void {
	const rowBytes = <usize>halfWidth << 4;
	const weightsEnd = weights + rowBytes;
	const reach = halfWidth - 1;
	for (let m = 0; m < count; m++) {
		const position = start + <f64>m * step;
		const whole = floor(position);
		const place = (position - whole) * ROWS_PER_SAMPLE;
		const row = floor(place);
		const blend = f64x2.splat(place - row);
		let lower = rows + <usize>(<i32>row) * rowBytes;
		for (let at = weights; at < weightsEnd; at += 16) {
			const below = v128.load(lower);
			const above = v128.load(lower + rowBytes);
			v128.store(at, f64x2.add(below, f64x2.mul(blend, f64x2.sub(above, below))));
			lower += 16;
		}
		let from = samples + (<usize>(<i32>whole - reach) << 3);
		let to = windows + (<usize>m << 3);
		let left = channelCount;
		for (; left >= 4; left -= 4) {
			let a = f64x2.splat(0);
			let b = a;
			let c = a;
			let d = a;
			let p = from;
			let q = from + sampleStride;
			let r = q + sampleStride;
			let s = r + sampleStride;
			for (let at = weights; at < weightsEnd; at += 16) {
				const w = v128.load(at);
				a = f64x2.add(a, f64x2.mul(v128.load(p), w));
				b = f64x2.add(b, f64x2.mul(v128.load(q), w));
				c = f64x2.add(c, f64x2.mul(v128.load(r), w));
				d = f64x2.add(d, f64x2.mul(v128.load(s), w));
				p += 16;
				q += 16;
				r += 16;
				s += 16;
			}
			const ab = totals(a, b);
			const cd = totals(c, d);
			v128.store64_lane(to, ab, 0);
			v128.store64_lane(to + windowStride, ab, 1);
			to += windowStride << 1;
			v128.store64_lane(to, cd, 0);
			v128.store64_lane(to + windowStride, cd, 1);
			to += windowStride << 1;
			from += sampleStride << 2;
		}
		for (; left >= 2; left -= 2) {
			let a = f64x2.splat(0);
			let b = a;
			let p = from;
			let q = from + sampleStride;
			for (let at = weights; at < weightsEnd; at += 16) {
				const w = v128.load(at);
				a = f64x2.add(a, f64x2.mul(v128.load(p), w));
				b = f64x2.add(b, f64x2.mul(v128.load(q), w));
				p += 16;
				q += 16;
			}
			const ab = totals(a, b);
			v128.store64_lane(to, ab, 0);
			v128.store64_lane(to + windowStride, ab, 1);
			to += windowStride << 1;
			from += sampleStride << 1;
		}
		if (left) {
			let a = f64x2.splat(0);
			for (let at = weights; at < weightsEnd; at += 16) {
				a = f64x2.add(a, f64x2.mul(v128.load(from), v128.load(at)));
				from += 16;
			}
			v128.store64_lane(to, totals(a, a), 0);
		}
	}
}
