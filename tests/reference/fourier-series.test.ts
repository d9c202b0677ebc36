import { describe, expect, it } from 'vitest';
import { partialSum, residualOf } from '$lib/harmonics/shape/reconstruction';
import type { OrderRow } from '$lib/harmonics/shape/order-row';
import { thd_pctOfFundamental } from '$lib/harmonics/distortion';
import { fourierLines } from '$lib/numerics/fourier-integral/fourier-integral';
import {
	cutPieces,
	integralOf,
	productIntegral,
	valuesOnPieces
} from '$lib/numerics/fourier-integral/line-pieces';
import { sixPulseCurrentWithOverlap } from '$lib/synthesis/waveform-closed-forms';
import series from './fourier-series.json';

interface Entry {
	id: string;
	source: string;
	definition: string;
	parameters: {
		k?: number;
		d?: number;
		beta_degrees?: number;
		alpha_degrees?: number;
		mu_degrees?: number;
	};
	dc: number;
	rms: number;
	fundamentalOrder: number;
	thdAllOrders_pct: number;
	thdToOrder25_pct?: number;
	cos?: number[];
	sin?: number[];
	amplitude?: number[];
	displacement_deg?: number;
}

/** A smooth part of one period; θ in radians. */
interface Part {
	from: number;
	to: number;
	value: (theta: number) => number;
}

const PI = Math.PI;
const radians = (degrees: number) => (degrees * PI) / 180;

/** Parts between corners, each a straight line through the values just inside. */
function stretch(corners: readonly number[], value: (theta: number) => number): Part[] {
	return corners.slice(1).flatMap((to, i) => (to > corners[i]! ? [{ from: corners[i]!, to, value }] : []));
}

function blocks(levels: readonly [from: number, to: number, level: number][]): Part[] {
	return levels.map(([from, to, level]) => ({ from, to, value: () => level }));
}

const SIX_PULSE: [number, number, number][] = [
	[-PI / 3, PI / 3, 1],
	[(2 * PI) / 3, (4 * PI) / 3, -1]
];
const DELTA_WYE: [number, number, number][] = [
	[-PI / 6, PI / 6, 2 / Math.sqrt(3)],
	[PI / 6, PI / 2, 1 / Math.sqrt(3)],
	[-PI / 2, -PI / 6, 1 / Math.sqrt(3)],
	[(5 * PI) / 6, (7 * PI) / 6, -2 / Math.sqrt(3)],
	[PI / 2, (5 * PI) / 6, -1 / Math.sqrt(3)],
	[(7 * PI) / 6, (3 * PI) / 2, -1 / Math.sqrt(3)]
];

/** Sum of the blocks that hold θ. */
function levelAt(levels: readonly [number, number, number][], theta: number): number {
	return levels.reduce((sum, [from, to, level]) => sum + (theta > from && theta < to ? level : 0), 0);
}

/** The waves as their definitions state them, part by part; where no part is, the wave is zero. */
function partsOf({ id, parameters }: Entry): Part[] {
	const { k = 0, d = 0 } = parameters;
	const alpha = radians(parameters.alpha_degrees ?? 0);
	const mu = radians(parameters.mu_degrees ?? 0);
	const beta = radians(parameters.beta_degrees ?? 0);
	const base = 2 * PI * k;
	const pulse = (centre: number, sign: number) =>
		stretch([centre - base, centre, centre + base], (x) => sign * (1 - Math.abs(x - centre) / base));
	const kind = id.replace(/^fs-/, '').replace(/(-k1over\d+|-[\d.]+(deg)?|-a\d+-u\d+)$/, '');
	switch (kind) {
		case 'square':
			return blocks([
				[0, PI, 1],
				[PI, 2 * PI, -1]
			]);
		case 'sawtooth':
			return stretch([-PI, PI], (x) => x / PI);
		case 'triangle':
			return stretch([-PI, 0, PI], (x) => 1 - (2 * Math.abs(x)) / PI);
		case 'tri-pulse-bipolar':
			return [...pulse(0, 1), ...pulse(PI, -1)];
		case 'tri-pulse-unipolar':
			return pulse(0, 1);
		case 'parabola-x2':
			return stretch([-PI, PI], (x) => x * x);
		case 'parabola-odd':
			return stretch([-PI, 0, PI], (x) => x * (PI - Math.abs(x)));
		case 'halfwave-rectified':
			return stretch([0, PI], Math.sin);
		case 'fullwave-rectified':
			return stretch([0, PI, 2 * PI], (x) => Math.abs(Math.sin(x)));
		case 'rect-duty':
			return blocks([[-PI * d, PI * d, 1]]);
		case 'quasi-square':
			return blocks([
				[-beta / 2, beta / 2, 1],
				[PI - beta / 2, PI + beta / 2, -1]
			]);
		case 'trapezoid':
			return [
				...stretch([-alpha, alpha], (x) => x / alpha),
				...blocks([
					[alpha, PI - alpha, 1],
					[PI + alpha, 2 * PI - alpha, -1]
				]),
				...stretch([PI - alpha, PI + alpha], (x) => (PI - x) / alpha)
			];
		case 'six-pulse-deltawye':
			return blocks(DELTA_WYE);
		case 'twelve-pulse':
			return blocks(
				Array.from({ length: 12 }, (_, i) => {
					const from = -PI / 2 + (i * PI) / 6;
					return [from, from + PI / 6, levelAt([...SIX_PULSE, ...DELTA_WYE], from + PI / 12) / 2];
				})
			);
		case 'phase-controlled-R':
			return [...stretch([alpha, PI], Math.sin), ...stretch([PI + alpha, 2 * PI], Math.sin)];
		case 'six-pulse-overlap':
			return stretch(
				[0, 2 / 3, 1, 5 / 3].flatMap((third) => [third * PI, third * PI + mu]).concat(2 * PI),
				sixPulseCurrentWithOverlap(alpha, mu)
			);
		default:
			throw new Error(`no wave is known for ${id}`);
	}
}

const ORDERS = 25;

interface Integrals {
	/** [26] */
	cos: Float64Array;
	sin: Float64Array;
	square: number;
}

/** Integrals over the parts, each joined by `count` straight lines: exact where a part is straight. */
function integrate(parts: readonly Part[], count: number): Integrals {
	const sums: Integrals = { cos: new Float64Array(ORDERS + 1), sin: new Float64Array(ORDERS + 1), square: 0 };
	for (const { from, to, value } of parts) {
		const times = Float64Array.from({ length: count + 1 }, (_, i) =>
			i === count ? to : from + ((to - from) * i) / count
		);
		const pieces = cutPieces(times, from, to);
		const wave = valuesOnPieces(pieces, times.map(value));
		const lines = new Float64Array(2 * (ORDERS + 1));
		fourierLines(pieces, [wave], 1, ORDERS + 1, [lines]);
		expect(lines[0]).toBeCloseTo(integralOf(pieces, wave), 12);
		for (let n = 0; n <= ORDERS; n++) {
			// ∫f·exp(−jn(θ − from)) turned back to θ = 0: exp(−jnθ) = cos − j·sin.
			const c = Math.cos(n * from);
			const s = Math.sin(n * from);
			const re = lines[2 * n]! * c + lines[2 * n + 1]! * s;
			const im = lines[2 * n + 1]! * c - lines[2 * n]! * s;
			sums.cos[n]! += re / PI;
			sums.sin[n]! -= im / PI;
		}
		sums.square += productIntegral(pieces, wave, wave) / (2 * PI);
	}
	return sums;
}

/** Chords of a curved part are off by the square of their length; two lengths tell how much (Richardson). */
function extrapolate(parts: readonly Part[]): Integrals {
	const coarse = integrate(parts, 2000);
	const fine = integrate(parts, 4000);
	const better = (a: number, b: number) => b + (b - a) / 3;
	return {
		cos: fine.cos.map((b, n) => better(coarse.cos[n]!, b)),
		sin: fine.sin.map((b, n) => better(coarse.sin[n]!, b)),
		square: better(coarse.square, fine.square)
	};
}

function rowOf({ cos, sin }: Integrals): OrderRow {
	return {
		dc: cos[0]! / 2,
		components: cos.map((a, n) => Math.hypot(a, sin[n]!) / Math.SQRT2),
		phases_deg: cos.map((a, n) => (Math.atan2(-sin[n]!, a) * 180) / PI)
	};
}

const ENTRIES = series.waves as Entry[];

describe('Fourier series of closed forms, by the exact Fourier integral', () => {
	it('all entries are here', () => {
		expect(ENTRIES).toHaveLength(38);
	});

	it.each(ENTRIES.map((entry) => [entry.id, entry.source, entry] as const))(
		'%s (%s)',
		(_id, _source, entry) => {
			const found = extrapolate(partsOf(entry));
			const row = rowOf(found);
			const rms = Math.sqrt(found.square);
			const fundamental = row.components[entry.fundamentalOrder]! * Math.SQRT2;
			// The tables are rounded to 12 digits.
			const tolerance = 2e-10 * fundamental;
			expect(Math.abs(row.dc - entry.dc)).toBeLessThan(tolerance);
			expect(Math.abs(rms - entry.rms)).toBeLessThan(tolerance);
			for (let n = 1; n <= ORDERS; n++) {
				if (entry.cos && entry.sin) {
					expect(Math.abs(found.cos[n]! - entry.cos[n - 1]!)).toBeLessThan(tolerance);
					expect(Math.abs(found.sin[n]! - entry.sin[n - 1]!)).toBeLessThan(tolerance);
				} else {
					expect(Math.abs(row.components[n]! * Math.SQRT2 - entry.amplitude![n - 1]!)).toBeLessThan(
						tolerance
					);
				}
			}
			const one = row.components[entry.fundamentalOrder]!;
			const all_pct = 100 * Math.sqrt((rms * rms - row.dc ** 2) / (one * one) - 1);
			expect(Math.abs(all_pct - entry.thdAllOrders_pct)).toBeLessThan(1e-6);
			if (entry.fundamentalOrder === 1 && entry.thdToOrder25_pct !== undefined) {
				const to25_pct = thd_pctOfFundamental(row.components, rms, ORDERS);
				expect(Math.abs(to25_pct - entry.thdToOrder25_pct)).toBeLessThan(1e-7);
			}
		}
	);

	it.each(
		ENTRIES.filter((entry) => entry.displacement_deg !== undefined && entry.cos).map(
			(entry) => [entry.id, entry] as const
		)
	)('%s: the fundamental lags as published', (_id, entry) => {
		const { cos, sin } = extrapolate(partsOf(entry));
		// Behind sin θ: a sine of phase 0 has the phase −90° as a cosine.
		const lag_deg = (Math.atan2(-cos[1]!, sin[1]!) * 180) / PI;
		expect(Math.abs(lag_deg - entry.displacement_deg!)).toBeLessThan(1e-7);
	});
});

describe('partial sums of the published series', () => {
	it.each(ENTRIES.filter((entry) => entry.cos).map((entry) => [entry.id, entry] as const))(
		'%s: the rms left over is what the orders above 25 hold (Parseval), and no more',
		(_id, entry) => {
			const parts = partsOf(entry);
			const points = 1 << 14;
			// Mean of the limits from both sides where parts meet.
			const at = (theta: number) => {
				const turned = [theta, theta - 2 * PI];
				let sum = 0;
				for (const { from, to, value } of parts) {
					for (const x of turned) {
						if (x > from + 1e-12 && x < to - 1e-12) sum += value(x);
						else if (Math.abs(x - from) <= 1e-12 || Math.abs(x - to) <= 1e-12) sum += value(x) / 2;
					}
				}
				return sum;
			};
			const measured = Float64Array.from({ length: points }, (_, n) => at((2 * PI * n) / points));
			const row: OrderRow = {
				dc: entry.dc,
				components: Float64Array.from([
					NaN,
					...entry.cos!.map((a, i) => Math.hypot(a, entry.sin![i]!) / Math.SQRT2)
				]),
				phases_deg: Float64Array.from([
					NaN,
					...entry.cos!.map((a, i) => (Math.atan2(-entry.sin![i]!, a) * 180) / PI)
				])
			};
			const orders = Array.from({ length: ORDERS }, (_, i) => i + 1);
			const sum = partialSum(row, { orders, withDc: true, points });
			const left = Math.sqrt(
				entry.rms ** 2 - entry.dc ** 2 - row.components.slice(1).reduce((s, v) => s + v * v, 0)
			);
			const residual = residualOf(measured, sum.wave, 1);
			expect(sum.missingOrders).toEqual([]);
			expect(sum.rms ** 2 + left ** 2).toBeCloseTo(entry.rms ** 2, 12);
			// Steps fall between points: half a point of a step of height 2, as a share of the period.
			expect(Math.abs(residual.rms ** 2 - left ** 2)).toBeLessThan(4e-4 * entry.rms ** 2);
		}
	);
});
