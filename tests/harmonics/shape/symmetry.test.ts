import { describe, expect, it } from 'vitest';
import type { OrderRow } from '$lib/harmonics/shape/order-row';
import {
	describeHalfWaveFault,
	halfWaveAsymmetry_pctOfRms,
	waveSymmetry
} from '$lib/harmonics/shape/symmetry';
import { executeRealDft, planRealDft } from '$lib/numerics/dft/real-dft';

/** Orders 0 … 50 of one cycle of 4096 samples, phases referred to an arbitrary instant. */
function rowOf(wave: (theta: number) => number, shift_rad = 0): { row: OrderRow; cycle: Float64Array } {
	const count = 4096;
	const cycle = Float64Array.from({ length: count }, (_, n) => wave((2 * Math.PI * n) / count + shift_rad));
	const plan = planRealDft(count);
	executeRealDft(plan, cycle.slice());
	const components = new Float64Array(51);
	const phases_deg = new Float64Array(51).fill(NaN);
	for (let k = 1; k <= 50; k++) {
		const re = plan.spectrum[2 * k]!;
		const im = plan.spectrum[2 * k + 1]!;
		components[k] = (Math.SQRT2 * Math.hypot(re, im)) / count;
		phases_deg[k] = (Math.atan2(im, re) * 180) / Math.PI;
	}
	return { row: { dc: plan.spectrum[0]! / count, components, phases_deg }, cycle };
}

const centred = (theta: number) => theta - 2 * Math.PI * Math.floor((theta + Math.PI) / (2 * Math.PI));

// Symmetries of well-known waves, as any text on Fourier series lists them.
describe('symmetry of the wave', () => {
	it.each([0, 0.7, 4])('a triangle has all of them, wherever the cycle is begun (%f rad)', (shift) => {
		const { row, cycle } = rowOf((theta) => 1 - (2 * Math.abs(centred(theta))) / Math.PI, shift);
		const symmetry = waveSymmetry(row);
		expect(symmetry.halfWave_pctOfRms).toBeLessThan(1e-9);
		expect(symmetry.odd_pctOfRms).toBeLessThan(1e-6);
		expect(symmetry.even_pctOfRms).toBeLessThan(1e-6);
		expect(symmetry.quarterWave_pctOfRms).toBeLessThan(1e-6);
		expect(symmetry.strongestEven?.pctOfFundamental ?? 0).toBeLessThan(1e-9);
		expect(halfWaveAsymmetry_pctOfRms(cycle)).toBeLessThan(1e-9);
	});

	it('a sawtooth is odd and nothing else: even orders hold Σ1/(2k)² = a quarter of its power', () => {
		const { row } = rowOf((theta) => centred(theta + 1e-9) / Math.PI, 0.4);
		const symmetry = waveSymmetry(row);
		// All orders: √(1/4) = 50 %; to order 50: Σ_{k≤25} 1/4k² over Σ_{n≤50} 1/n².
		const part = Array.from({ length: 25 }, (_, i) => 1 / (2 * i + 2) ** 2).reduce((a, b) => a + b);
		const whole = Array.from({ length: 50 }, (_, i) => 1 / (i + 1) ** 2).reduce((a, b) => a + b);
		expect(symmetry.halfWave_pctOfRms).toBeCloseTo(100 * Math.sqrt(part / whole), 1);
		expect(symmetry.odd_pctOfRms).toBeLessThan(1);
		expect(symmetry.even_pctOfRms).toBeGreaterThan(40);
		expect(symmetry.strongestEven).toEqual({ order: 2, pctOfFundamental: expect.closeTo(50, 1) });
	});

	it('a half-wave rectified sine: dc 2/π and order 2 4/(3π) of the fundamental, even about its crest', () => {
		const { row, cycle } = rowOf((theta) => Math.max(0, Math.cos(theta)), 1);
		const symmetry = waveSymmetry(row);
		expect(symmetry.dc_pctOfFundamental).toBeCloseTo(100 / Math.PI / (0.5 / Math.SQRT2), 3);
		expect(symmetry.strongestEven).toEqual({
			order: 2,
			pctOfFundamental: expect.closeTo(400 / (3 * Math.PI), 3)
		});
		expect(symmetry.even_pctOfRms).toBeLessThan(1e-3);
		// Half of the power is in the fundamental, the rest is dc and even orders.
		expect(symmetry.halfWave_pctOfRms).toBeCloseTo(100 * Math.SQRT1_2, 3);
		expect(halfWaveAsymmetry_pctOfRms(cycle)).toBeCloseTo(100 * Math.SQRT1_2, 6);
		expect(symmetry.odd_pctOfRms).toBeCloseTo(100 * Math.SQRT1_2, 3);
	});

	it('an ac regulator fired late keeps half-wave symmetry and loses the others', () => {
		const fired = (theta: number) => {
			const at = theta - Math.PI * Math.floor(theta / Math.PI);
			return at > Math.PI / 2 ? Math.sin(theta) : 0;
		};
		const symmetry = waveSymmetry(rowOf((theta) => fired(theta + 1e-6)).row);
		expect(symmetry.halfWave_pctOfRms).toBeLessThan(0.2);
		expect(symmetry.odd_pctOfRms).toBeGreaterThan(10);
		expect(symmetry.quarterWave_pctOfRms).toBeCloseTo(symmetry.odd_pctOfRms, 1);
		// With odd orders alone, odd about the crossing and even about the crest are one and the same.
		expect(symmetry.even_pctOfRms).toBeCloseTo(symmetry.odd_pctOfRms, 1);
	});

	it('without a fundamental nothing can be aligned; an order without data is left out, not zero', () => {
		const { row } = rowOf((theta) => Math.cos(2 * theta));
		row.components[1] = 0;
		const symmetry = waveSymmetry(row);
		expect(symmetry.halfWave_pctOfRms).toBeCloseTo(100, 9);
		expect(symmetry.odd_pctOfRms).toBeNaN();
		expect(symmetry.evenOrders_pctOfFundamental).toBeNaN();
		const cut = rowOf((theta) => Math.cos(theta) + 0.1 * Math.cos(2 * theta)).row;
		cut.components.fill(NaN, 30);
		expect(waveSymmetry(cut).evenOrders_pctOfFundamental).toBeCloseTo(10, 9);
	});
});

describe('half-waves that differ', () => {
	const channel = { name: 'I1', quantity: 'current', channelIndex: 3 } as const;
	const remarkFor = (wave: (theta: number) => number) =>
		describeHalfWaveFault(waveSymmetry(rowOf(wave).row), channel);

	it('even orders with dc, even orders alone and dc alone have their own possible causes', () => {
		const both = remarkFor((theta) => Math.cos(theta) + 0.12 * Math.cos(2 * theta) + 0.05)!;
		expect(both).toMatchObject({ severity: 'notes', code: 'half-waves-differ', channelIndex: 3 });
		expect(both.sentence).toContain(
			'12 % of the fundamental (most of all order 2 with 12 %), with a constant part of 7.07 %'
		);
		expect(both.sentence).toContain('Possible causes to look for: a half-wave rectifier');
		const even = remarkFor((theta) => Math.cos(theta) + 0.12 * Math.cos(4 * theta))!;
		expect(even.sentence).toContain('order 4');
		expect(even.sentence).not.toContain('rectifier');
		expect(remarkFor((theta) => Math.cos(theta) + 0.05)!.sentence).toContain('zero of the sensor');
	});

	it('a wave of odd orders gives none, nor does one without data', () => {
		expect(remarkFor((theta) => Math.cos(theta) + 0.3 * Math.cos(5 * theta))).toBeNull();
		const nothing = new Float64Array(51).fill(NaN);
		expect(
			describeHalfWaveFault(waveSymmetry({ dc: NaN, components: nothing, phases_deg: nothing }), channel)
		).toBeNull();
	});
});
