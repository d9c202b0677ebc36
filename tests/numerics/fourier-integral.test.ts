import { describe, expect, it } from 'vitest';
import {
	fourierIntegral,
	fourierLines,
	interpolationResponse,
	taperedIntegral
} from '$lib/numerics/fourier-integral/fourier-integral';
import {
	cutPieces,
	integralOf,
	productIntegral,
	valuesOnPieces
} from '$lib/numerics/fourier-integral/line-pieces';
import { seededRandom } from '$lib/synthesis/waveform-random';

const TWO_PI = 2 * Math.PI;

/** Breakpoints of piecewise-linear waves of period 1 over [−0.5, 2.5], with `extra` random instants between them. */
function sampleWave(breaks: readonly number[], wave: (t: number) => number, extra: number) {
	const random = seededRandom(7);
	const times: number[] = [];
	for (let period = -1; period <= 3; period++) for (const b of breaks) times.push(period + b);
	for (let i = 0; i < extra; i++) times.push(-0.5 + 3 * random.uniform());
	const sorted = [...new Set(times)].sort((a, b) => a - b);
	return { times: Float64Array.from(sorted), values: Float64Array.from(sorted, wave) };
}

const fraction = (t: number) => t - Math.floor(t);

const triangle = (t: number) => 1 - 4 * Math.abs(fraction(t) - 0.5);
const ALPHA = 30 / 360;
/** Odd trapezoid of slope width α, through 0 at t = 0. */
const trapezoid = (t: number) => {
	const at = fraction(t + 0.5) - 0.5;
	const inner = Math.min(Math.abs(at), 0.5 - Math.abs(at));
	return Math.sign(at) * Math.min(1, inner / ALPHA);
};

describe('Fourier integral of straight pieces', () => {
	it.each([0, 37, 1000])(
		'triangle, %i instants beside its corners: a_n = 8/(π²n²), n odd (Zwillinger, CRC Standard Mathematical Tables)',
		(extra) => {
			const { times, values } = sampleWave([0, 0.5], triangle, extra);
			const pieces = cutPieces(times, 0.5, 1.5);
			const wave = valuesOnPieces(pieces, values);
			const lines = new Float64Array(2 * 52);
			fourierLines(pieces, [wave], TWO_PI, 52, [lines]);
			expect(lines[0]).toBeCloseTo(0, 14);
			for (let n = 1; n < 52; n++) {
				const amplitude = n % 2 === 1 ? 8 / (Math.PI * n) ** 2 : 0;
				expect(Math.abs(2 * lines[2 * n]! - amplitude)).toBeLessThan(1e-12);
				expect(Math.abs(2 * lines[2 * n + 1]!)).toBeLessThan(1e-12);
			}
			expect(integralOf(pieces, wave)).toBeCloseTo(0, 14);
			expect(productIntegral(pieces, wave, wave)).toBeCloseTo(1 / 3, 14);
		}
	);

	it('trapezoid with 30° slopes: b_n = 4 sin(nα)/(πα n²), n odd; mean square 1 − 4α/(3π) (Fourier table entry)', () => {
		const alpha = Math.PI / 6;
		const { times, values } = sampleWave([ALPHA, 0.5 - ALPHA, 0.5 + ALPHA, 1 - ALPHA], trapezoid, 200);
		const pieces = cutPieces(times, 0, 1);
		const wave = valuesOnPieces(pieces, values);
		for (let n = 1; n < 200; n++) {
			const { re, im } = fourierIntegral(pieces, wave, TWO_PI * n);
			const b = n % 2 === 1 ? (4 * Math.sin(n * alpha)) / (Math.PI * alpha * n * n) : 0;
			expect(Math.abs(2 * re)).toBeLessThan(1e-12);
			expect(Math.abs(-2 * im - b)).toBeLessThan(1e-12);
		}
		expect(productIntegral(pieces, wave, wave)).toBeCloseTo(1 - (4 * alpha) / (3 * Math.PI), 13);
	});

	it('ramp over a span that ends between instants: closed form of ∫ t·exp(−jωt) dt', () => {
		const times = Float64Array.of(0, 0.13, 0.2, 0.9, 1.4, 2);
		const from = 0.05;
		const to = 1.77;
		const pieces = cutPieces(times, from, to);
		const ramp = valuesOnPieces(pieces, times);
		const T = to - from;
		for (const omega of [1e-9, 1e-4, 0.3, 3, 50, -7]) {
			const { re, im } = fourierIntegral(pieces, ramp, omega);
			// With u = t − from: from·∫exp + ∫u·exp; the second by parts. Near ω = 0 the first terms of the power series.
			const small = Math.abs(omega) < 1e-3;
			const c = Math.cos(omega * T);
			const s = Math.sin(omega * T);
			const wantRe = small
				? from * T + (T * T) / 2 - (omega * omega * T ** 4) / 8
				: (from * s) / omega + (T * s) / omega + (c - 1) / omega ** 2;
			const wantIm = small
				? -omega * ((from * T * T) / 2 + T ** 3 / 3)
				: (from * (c - 1)) / omega + (T * c) / omega - s / omega ** 2;
			expect(Math.abs(re - wantRe)).toBeLessThan(1e-8);
			expect(Math.abs(im - wantIm)).toBeLessThan(1e-8 * Math.min(1, Math.abs(omega) * 10));
			if (omega >= 0.3) {
				expect(Math.abs(re - wantRe)).toBeLessThan(1e-13);
				expect(Math.abs(im - wantIm)).toBeLessThan(1e-13);
			}
		}
	});

	it('many lines by rotation are the single integrals to 1e-13, also far from the start of time', () => {
		const random = seededRandom(3);
		const start = 86_400;
		let t = start;
		const times = Float64Array.from({ length: 3000 }, () => (t += 1e-4 * (0.2 + random.uniform())));
		const values = times.map(() => random.normal());
		const pieces = cutPieces(times, start + 0.01, start + 0.19);
		const wave = valuesOnPieces(pieces, values);
		const step = TWO_PI / 0.18;
		const lines = new Float64Array(2 * 613);
		fourierLines(pieces, [wave], step, 613, [lines]);
		for (const k of [0, 1, 2, 31, 32, 33, 200, 612]) {
			const { re, im } = fourierIntegral(pieces, wave, k * step);
			expect(Math.abs(lines[2 * k]! - re)).toBeLessThan(0.18e-13);
			expect(Math.abs(lines[2 * k + 1]! - im)).toBeLessThan(0.18e-13);
		}
	});

	it('is smooth where the series takes over from the closed form', () => {
		const times = Float64Array.of(0, 1);
		const pieces = cutPieces(times, 0, 1);
		const wave = valuesOnPieces(pieces, Float64Array.of(-1, 1));
		const below = fourierIntegral(pieces, wave, 0.5 - 1e-9);
		const above = fourierIntegral(pieces, wave, 0.5 + 1e-9);
		// d|F|/dω is below 0.1: two nano-radians apart the values differ by less than 1e-9.
		expect(Math.hypot(below.re - above.re, below.im - above.im)).toBeLessThan(1e-9);
		const { re, im } = fourierIntegral(pieces, wave, 0.4);
		// −j·(sin θ − θ cos θ)/θ²·exp(−jθ), θ = 0.2, from the closed form in 50-digit decimal arithmetic.
		const odd = 0.0664003806703222;
		expect(re).toBeCloseTo(-odd * Math.sin(0.2), 13);
		expect(im).toBeCloseTo(-odd * Math.cos(0.2), 13);
	});

	it('a missing point makes the span unknown, one outside does not', () => {
		const times = Float64Array.of(0, 1, 2, 3, 4);
		const values = Float64Array.of(NaN, 1, 2, 3, 4);
		const inside = cutPieces(times, 0.5, 2);
		const outside = cutPieces(times, 1, 2.5);
		expect(fourierIntegral(inside, valuesOnPieces(inside, values), 1).re).toBeNaN();
		const lines = [new Float64Array(4)];
		fourierLines(inside, [valuesOnPieces(inside, values)], 1, 2, lines);
		expect([...lines[0]!]).toEqual([NaN, NaN, NaN, NaN]);
		expect(integralOf(inside, valuesOnPieces(inside, values))).toBeNaN();
		expect(integralOf(outside, valuesOnPieces(outside, values))).toBeCloseTo(1.75 * 1.5, 14);
	});
});

describe('tones joined by straight lines', () => {
	it('keep (sin θ/θ)² of their amplitude with even spacing (common practice: linear interpolation is a sinc² filter)', () => {
		const count = 200;
		const times = Float64Array.from({ length: count + 1 }, (_, i) => i / count);
		for (const order of [1, 7, 40, 90]) {
			const values = times.map((t) => Math.cos(TWO_PI * order * t + 0.4));
			const pieces = cutPieces(times, 0, 1);
			const { re, im } = fourierIntegral(pieces, valuesOnPieces(pieces, values), TWO_PI * order);
			const theta = (Math.PI * order) / count;
			const share = (Math.sin(theta) / theta) ** 2;
			expect(2 * Math.hypot(re, im)).toBeCloseTo(share, 12);
			expect(Math.atan2(im, re)).toBeCloseTo(0.4, 12);
			expect(interpolationResponse(pieces, TWO_PI * order)).toBeCloseTo(share, 12);
		}
	});

	it('keep the stated share of a complex tone with any spacing', () => {
		const random = seededRandom(11);
		let t = 0;
		const times = Float64Array.from({ length: 500 }, () => (t += 0.001 * (0.1 + 2 * random.uniform())));
		const from = times[0]!;
		const to = times[499]!;
		const pieces = cutPieces(times, from, to);
		for (const omega of [50, 900, 2500]) {
			const cos = fourierIntegral(
				pieces,
				valuesOnPieces(
					pieces,
					times.map((x) => Math.cos(omega * (x - from)))
				),
				omega
			);
			const sin = fourierIntegral(
				pieces,
				valuesOnPieces(
					pieces,
					times.map((x) => Math.sin(omega * (x - from)))
				),
				omega
			);
			expect((cos.re - sin.im) / (to - from)).toBeCloseTo(interpolationResponse(pieces, omega), 12);
			expect((cos.im + sin.re) / (to - from)).toBeCloseTo(0, 12);
		}
	});

	it('have their phase found through the taper, a strong third order beside them', () => {
		const random = seededRandom(5);
		let t = 0;
		const times = Float64Array.from({ length: 4000 }, () => (t += 5e-5 * (0.5 + random.uniform())));
		const f = 50;
		const values = times.map(
			(x) => 3 * Math.cos(TWO_PI * f * x + 1) + Math.cos(3 * TWO_PI * f * x - 2) + 0.5
		);
		const centre = 0.0937;
		const pieces = cutPieces(times, centre - 2 / f, centre + 2 / f);
		const { amplitude, phase_rad } = taperedIntegral(pieces, valuesOnPieces(pieces, values), f);
		const turned = TWO_PI * f * centre + 1;
		expect(Math.sin(phase_rad - turned)).toBeCloseTo(0, 5);
		expect(Math.cos(phase_rad - turned)).toBeCloseTo(1, 5);
		expect(amplitude).toBeCloseTo(3, 3);
	});
});
