// Fourier transform of real windows, two channels at a time: lane 0 of every vector belongs to one, lane 1 to the other.
//
// Even and odd samples of a window of 2M points are taken as the real and imaginary part of M complex values; these are
// transformed in place by decimation in frequency, radix 4 with a last pass of radix 8 or 4, and leave in digit-reversed
// order; the lines of the real window are put together from lines k and M−k.
// A complex value is two vectors, re and im: 32 bytes.

/** Blocks of this many complex values fit the first-level cache; larger ones are finished quarter by quarter. */
const CACHED: usize = 1024;
/** Bytes of the twiddle factors of one butterfly: re and im of w, w², w³. */
const TWIDDLE_BYTES: usize = 48;
const SQRT_HALF: f64 = 0.7071067811865476;

@inline
function add(a: v128, b: v128): v128 {
	return f64x2.add(a, b);
}

@inline
function sub(a: v128, b: v128): v128 {
	return f64x2.sub(a, b);
}

@inline
function mul(a: v128, b: v128): v128 {
	return f64x2.mul(a, b);
}

/** Stores (re + j·im)·(twiddle at `w`). */
@inline
function storeTurned(to: usize, re: v128, im: v128, w: usize): void {
	const wr = v128.load64_splat(w);
	const wi = v128.load64_splat(w, 8);
	v128.store(to, sub(mul(re, wr), mul(im, wi)));
	v128.store(to, add(mul(re, wi), mul(im, wr)), 16);
}

/** First pass over M = 4·quarter values, out of the windows of two channels. */
function passFromWindows(first: usize, second: usize, to: usize, quarter: usize, twiddles: usize): void {
	// A complex value is two neighbouring samples of a window: 16 bytes there, 32 here.
	const near = quarter << 4;
	const far = quarter << 5;
	const end = first + near;
	for (; first < end; first += 16, second += 16, to += 32, twiddles += TWIDDLE_BYTES) {
		let x = v128.load(first);
		let y = v128.load(second);
		const ar = v128.shuffle<f64>(x, y, 0, 2);
		const ai = v128.shuffle<f64>(x, y, 1, 3);
		x = v128.load(first + near);
		y = v128.load(second + near);
		const br = v128.shuffle<f64>(x, y, 0, 2);
		const bi = v128.shuffle<f64>(x, y, 1, 3);
		x = v128.load(first + 2 * near);
		y = v128.load(second + 2 * near);
		const cr = v128.shuffle<f64>(x, y, 0, 2);
		const ci = v128.shuffle<f64>(x, y, 1, 3);
		x = v128.load(first + 3 * near);
		y = v128.load(second + 3 * near);
		const dr = v128.shuffle<f64>(x, y, 0, 2);
		const di = v128.shuffle<f64>(x, y, 1, 3);
		butterfly(to, far, ar, ai, br, bi, cr, ci, dr, di, twiddles);
	}
}

/** One pass over 4·quarter values in place. */
function pass(at: usize, quarter: usize, twiddles: usize): void {
	const far = quarter << 5;
	const end = at + far;
	for (; at < end; at += 32, twiddles += TWIDDLE_BYTES) {
		const b = at + far;
		const c = b + far;
		const d = c + far;
		butterfly(
			at,
			far,
			v128.load(at),
			v128.load(at, 16),
			v128.load(b),
			v128.load(b, 16),
			v128.load(c),
			v128.load(c, 16),
			v128.load(d),
			v128.load(d, 16),
			twiddles
		);
	}
}

@inline
function butterfly(
	to: usize,
	far: usize,
	ar: v128,
	ai: v128,
	br: v128,
	bi: v128,
	cr: v128,
	ci: v128,
	dr: v128,
	di: v128,
	w: usize
): void {
	const sr = add(ar, cr);
	const si = add(ai, ci);
	const tr = add(br, dr);
	const ti = add(bi, di);
	v128.store(to, add(sr, tr));
	v128.store(to, add(si, ti), 16);
	// The quarters hold lines 4k, 4k+2, 4k+1, 4k+3: with the halves in this order, digits reverse as bits.
	storeTurned(to + far, sub(sr, tr), sub(si, ti), w + 16);
	const ur = sub(ar, cr);
	const ui = sub(ai, ci);
	const vr = sub(br, dr);
	const vi = sub(bi, di);
	storeTurned(to + 2 * far, add(ur, vi), sub(ui, vr), w);
	storeTurned(to + 3 * far, sub(ur, vi), add(ui, vr), w + 32);
}

/** Transforms of four neighbouring values each, in [at, end). */
function lastFours(at: usize, end: usize): void {
	for (; at < end; at += 128) {
		const ar = v128.load(at);
		const ai = v128.load(at, 16);
		const br = v128.load(at, 32);
		const bi = v128.load(at, 48);
		const cr = v128.load(at, 64);
		const ci = v128.load(at, 80);
		const dr = v128.load(at, 96);
		const di = v128.load(at, 112);
		const sr = add(ar, cr);
		const si = add(ai, ci);
		const tr = add(br, dr);
		const ti = add(bi, di);
		v128.store(at, add(sr, tr));
		v128.store(at, add(si, ti), 16);
		v128.store(at, sub(sr, tr), 32);
		v128.store(at, sub(si, ti), 48);
		const ur = sub(ar, cr);
		const ui = sub(ai, ci);
		const vr = sub(br, dr);
		const vi = sub(bi, di);
		v128.store(at, add(ur, vi), 64);
		v128.store(at, sub(ui, vr), 80);
		v128.store(at, sub(ur, vi), 96);
		v128.store(at, add(ui, vr), 112);
	}
}

/** Transforms of eight neighbouring values each, in [at, end): halves first, then fours. */
function lastEights(at: usize, end: usize): void {
	const h = f64x2.splat(SQRT_HALF);
	for (; at < end; at += 256) {
		for (let i: usize = 0; i < 128; i += 32) {
			const p = at + i;
			const ar = v128.load(p);
			const ai = v128.load(p, 16);
			const br = v128.load(p, 128);
			const bi = v128.load(p, 144);
			v128.store(p, add(ar, br));
			v128.store(p, add(ai, bi), 16);
			v128.store(p, sub(ar, br), 128);
			v128.store(p, sub(ai, bi), 144);
		}
		// The second half turns by 0, 45, 90 and 135 degrees backwards.
		let re = v128.load(at, 160);
		let im = v128.load(at, 176);
		v128.store(at, mul(h, add(re, im)), 160);
		v128.store(at, mul(h, sub(im, re)), 176);
		re = v128.load(at, 192);
		im = v128.load(at, 208);
		v128.store(at, im, 192);
		v128.store(at, f64x2.neg(re), 208);
		re = v128.load(at, 224);
		im = v128.load(at, 240);
		v128.store(at, mul(h, sub(im, re)), 224);
		v128.store(at, f64x2.neg(mul(h, add(re, im))), 240);
		lastFours(at, at + 256);
	}
}

/** Finishes blocks of `size` values in [at, end); `twiddles` are those of this size, smaller sizes follow. */
function finish(at: usize, end: usize, size: usize, twiddles: usize): void {
	while (size > 8) {
		const quarter = size >> 2;
		const next = twiddles + quarter * TWIDDLE_BYTES;
		if (size > CACHED) {
			for (; at < end; at += size << 5) {
				pass(at, quarter, twiddles);
				finish(at, at + (size << 5), quarter, next);
			}
			return;
		}
		for (let block = at; block < end; block += size << 5) pass(block, quarter, twiddles);
		size = quarter;
		twiddles = next;
	}
	if (size == 8) lastEights(at, end);
	else lastFours(at, end);
}

/**
 * Lines 0 … lineCount−1 of the real windows.
 * places   per line two u32: byte offsets of complex lines k and M−k among the values
 * turns    per line two f64: re and im of −j/2·exp(−j2πk/(2M))
 * gains    per line one f64, which the line is multiplied by
 */
function separate(
	values: usize,
	places: usize,
	turns: usize,
	gains: usize,
	lineCount: i32,
	firstOut: usize,
	secondOut: usize
): void {
	const half = f64x2.splat(0.5);
	const end = firstOut + (<usize>lineCount << 4);
	for (; firstOut < end; firstOut += 16, secondOut += 16, places += 8, turns += 16, gains += 8) {
		const a = values + <usize>load<u32>(places);
		const b = values + <usize>load<u32>(places, 4);
		const ar = v128.load(a);
		const ai = v128.load(a, 16);
		const br = v128.load(b);
		const bi = v128.load(b, 16);
		const er = mul(half, add(ar, br));
		const ei = mul(half, sub(ai, bi));
		const dr = sub(ar, br);
		const di = add(ai, bi);
		const wr = v128.load64_splat(turns);
		const wi = v128.load64_splat(turns, 8);
		const gain = v128.load64_splat(gains);
		const re = mul(gain, add(er, sub(mul(dr, wr), mul(di, wi))));
		const im = mul(gain, add(ei, add(mul(dr, wi), mul(di, wr))));
		v128.store(firstOut, v128.shuffle<f64>(re, im, 0, 2));
		v128.store(secondOut, v128.shuffle<f64>(re, im, 1, 3));
	}
}

/** Spectra of all windows; 2M = `points` ≥ 64. `values` has room for M complex values of two channels. */
export function transform(
	windows: usize,
	windowStride: usize,
	spectra: usize,
	spectrumStride: usize,
	channelCount: i32,
	points: usize,
	lineCount: i32,
	values: usize,
	twiddles: usize,
	places: usize,
	turns: usize,
	gains: usize
): void {
	const size = points >> 1;
	const quarter = size >> 2;
	for (let c = 0; c < channelCount; c += 2) {
		// An odd last channel keeps itself company.
		const other = <usize>(c + 1 < channelCount);
		passFromWindows(windows, windows + other * windowStride, values, quarter, twiddles);
		finish(values, values + (size << 5), quarter, twiddles + quarter * TWIDDLE_BYTES);
		separate(values, places, turns, gains, lineCount, spectra, spectra + other * spectrumStride);
		windows += windowStride << 1;
		spectra += spectrumStride << 1;
	}
}
