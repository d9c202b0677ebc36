import { describe, expect, it } from 'vitest';
import { interpolateEvenly, planInterpolator } from '$lib/numerics/resample/interpolator';
import { besselI0, designKaiserKernel } from '$lib/numerics/resample/kaiser-kernel';

describe('Bessel function I0', () => {
	// Abramowitz & Stegun, Handbook of Mathematical Functions, table 9.8 (I0(1), I0(2), I0(5)), values from memory.
	it.each([
		[0, 1],
		[1, 1.2660658777520084],
		[2, 2.2795853023360673],
		[5, 27.239871823604442]
	])('I0(%d) = %d', (x, expected) => {
		expect(Math.abs(besselI0(x) / expected - 1)).toBeLessThan(1e-14);
	});
});

describe('band-limited interpolation', () => {
	const kernel = designKaiserKernel(0.4, 0.6, 120);
	const plan = planInterpolator(kernel);

	function worstError(frequency: number): number {
		const samples = Float64Array.from({ length: 600 }, (_, n) => Math.cos(2 * Math.PI * frequency * n + 0.7));
		const count = 400;
		const out = new Float64Array(count);
		const step = 1.137;
		const start = plan.guard + 0.31;
		interpolateEvenly(plan, [samples], start, step, count, [out]);
		let worst = 0;
		for (let m = 0; m < count; m++) {
			const exact = Math.cos(2 * Math.PI * frequency * (start + m * step) + 0.7);
			worst = Math.max(worst, Math.abs(out[m]! - exact));
		}
		return worst;
	}

	it.each([0, 0.01, 0.1, 0.2, 0.3, 0.398])('passes a tone at %d of the rate within 4e-6', (frequency) => {
		// Ripple of a 120 dB design is 1e-6, an image at (1 − f) as much again; the table adds 3e-7 to each.
		expect(worstError(frequency)).toBeLessThan(4e-6);
	});

	it('stops what would fold when fewer points are taken', () => {
		const lowPass = planInterpolator(designKaiserKernel(0.05, 0.15, 120));
		const samples = Float64Array.from({ length: 2000 }, (_, n) => Math.cos(2 * Math.PI * 0.17 * n));
		const out = new Float64Array(200);
		interpolateEvenly(lowPass, [samples], lowPass.guard + 1, 5.3, 200, [out]);
		expect(Math.max(...out.map(Math.abs))).toBeLessThan(3e-6);
	});

	it('needs no sample further away than its guard', () => {
		const samples = new Float64Array(2 * plan.guard + 2).fill(1);
		const out = new Float64Array(1);
		interpolateEvenly(plan, [samples], plan.guard + 0.5, 1, 1, [out]);
		expect(Math.abs(out[0]! - 1)).toBeLessThan(4e-6);
	});
});
