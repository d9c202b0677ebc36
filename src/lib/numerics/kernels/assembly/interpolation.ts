// Band-limited interpolation of several channels with one set of weights per output point.
//
// Loops are written out over eight taps: one turn of a loop costs as much as two taps of a channel.

/** Rows of the weight table between one sample and the next, as in resample/interpolator.ts. */
const ROWS_PER_SAMPLE: f64 = 2048;

@inline
function between(below: v128, above: v128, blend: v128): v128 {
	return f64x2.add(below, f64x2.mul(blend, f64x2.sub(above, below)));
}

/** Weights of one point, from the table's row at `lower` and the one after it. */
@inline
function blendRows(weights: usize, lower: usize, rowBytes: usize, blend: v128): void {
	const end = weights + rowBytes;
	let upper = lower + rowBytes;
	for (; weights + 64 <= end; weights += 64, lower += 64, upper += 64) {
		v128.store(weights, between(v128.load(lower), v128.load(upper), blend));
		v128.store(weights, between(v128.load(lower, 16), v128.load(upper, 16), blend), 16);
		v128.store(weights, between(v128.load(lower, 32), v128.load(upper, 32), blend), 32);
		v128.store(weights, between(v128.load(lower, 48), v128.load(upper, 48), blend), 48);
	}
	for (; weights < end; weights += 16, lower += 16, upper += 16) {
		v128.store(weights, between(v128.load(lower), v128.load(upper), blend));
	}
}

/** `sum` and the next two taps; lanes keep even and odd taps apart. */
@inline
function withTwo(sum: v128, samples: usize, weights: usize): v128 {
	return f64x2.add(sum, f64x2.mul(v128.load(samples), v128.load(weights)));
}

/** `sum` and the next eight taps. */
@inline
function withEight(sum: v128, samples: usize, weights: usize): v128 {
	sum = f64x2.add(sum, f64x2.mul(v128.load(samples), v128.load(weights)));
	sum = f64x2.add(sum, f64x2.mul(v128.load(samples, 16), v128.load(weights, 16)));
	sum = f64x2.add(sum, f64x2.mul(v128.load(samples, 32), v128.load(weights, 32)));
	return f64x2.add(sum, f64x2.mul(v128.load(samples, 48), v128.load(weights, 48)));
}

/** Adds up even and odd taps of two channels and stores the values one window apart. */
@inline
function storeTotals(to: usize, windowStride: usize, one: v128, two: v128): void {
	const totals = f64x2.add(v128.shuffle<f64>(one, two, 0, 2), v128.shuffle<f64>(one, two, 1, 3));
	v128.store64_lane(to, totals, 0);
	v128.store64_lane(to + windowStride, totals, 1);
}

/**
 * Values of all channels at start + m·step, m = 0 … count−1.
 * rows      weight table, 2·halfWidth f64 per row
 * weights   room for 2·halfWidth f64
 * samples   first channel's samples, the next `sampleStride` bytes further; windows likewise
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
	const end = weights + rowBytes;
	const reach = halfWidth - 1;
	for (let m = 0; m < count; m++) {
		const position = start + <f64>m * step;
		const whole = floor(position);
		const place = (position - whole) * ROWS_PER_SAMPLE;
		const row = floor(place);
		blendRows(weights, rows + <usize>(<i32>row) * rowBytes, rowBytes, f64x2.splat(place - row));

		let from = samples + (<usize>(<i32>whole - reach) << 3);
		let to = windows + (<usize>m << 3);
		let left = channelCount;
		for (; left >= 4; left -= 4) {
			let a = f64x2.splat(0);
			let b = a;
			let c = a;
			let d = a;
			let p = from;
			let q = p + sampleStride;
			let r = q + sampleStride;
			let s = r + sampleStride;
			let w = weights;
			for (; w + 64 <= end; w += 64, p += 64, q += 64, r += 64, s += 64) {
				a = withEight(a, p, w);
				b = withEight(b, q, w);
				c = withEight(c, r, w);
				d = withEight(d, s, w);
			}
			for (; w < end; w += 16, p += 16, q += 16, r += 16, s += 16) {
				a = withTwo(a, p, w);
				b = withTwo(b, q, w);
				c = withTwo(c, r, w);
				d = withTwo(d, s, w);
			}
			storeTotals(to, windowStride, a, b);
			storeTotals(to + 2 * windowStride, windowStride, c, d);
			from += 4 * sampleStride;
			to += 4 * windowStride;
		}
		for (; left >= 2; left -= 2) {
			let a = f64x2.splat(0);
			let b = a;
			let p = from;
			let q = p + sampleStride;
			let w = weights;
			for (; w + 64 <= end; w += 64, p += 64, q += 64) {
				a = withEight(a, p, w);
				b = withEight(b, q, w);
			}
			for (; w < end; w += 16, p += 16, q += 16) {
				a = withTwo(a, p, w);
				b = withTwo(b, q, w);
			}
			storeTotals(to, windowStride, a, b);
			from += 2 * sampleStride;
			to += 2 * windowStride;
		}
		if (left) {
			let a = f64x2.splat(0);
			let w = weights;
			for (; w + 64 <= end; w += 64, from += 64) a = withEight(a, from, w);
			for (; w < end; w += 16, from += 16) a = withTwo(a, from, w);
			store<f64>(to, f64x2.extract_lane(a, 0) + f64x2.extract_lane(a, 1));
		}
	}
}
