import { describe, expect, it } from 'vitest';
import { boundOfSum, coverageOfSum, type SumPart } from '$lib/numerics/stats/sum-coverage';
import { seededRandom } from '$lib/synthesis/waveform-random';

const rectangle = (u = 1): SumPart => ({ shape: 'rectangular', u });
const normal = (u = 1): SumPart => ({ shape: 'normal', u });
const student = (degreesOfFreedom: number): SumPart => ({ shape: 'student', u: 1, degreesOfFreedom });

describe('share of a sum inside a bound', () => {
	// Normal distribution: table G.1 of JCGM 100:2008 (from memory), more digits from any table of the error function.
	it.each([
		[1, 0.682689],
		[1.96, 0.950004],
		[2, 0.9545],
		[3, 0.9973]
	])('normal, %d standard deviations', (bound, share) => {
		expect(coverageOfSum([normal()], bound)).toBeCloseTo(share, 4);
	});

	it('one rectangle: bound over half-width', () => {
		expect(coverageOfSum([rectangle()], 1)).toBeCloseTo(1 / Math.sqrt(3), 4);
		expect(coverageOfSum([rectangle()], 1.7)).toBeCloseTo(1.7 / Math.sqrt(3), 4);
		expect(coverageOfSum([rectangle()], 2)).toBe(1);
	});

	// Closed form: the sum of two equal rectangles is a triangle of half-width 2a, u = a·√(2/3).
	it('two equal rectangles are the triangle', () => {
		const u = Math.sqrt(2);
		const share = 1 - (1 - (2 * u) / (2 * Math.sqrt(3))) ** 2;
		expect(coverageOfSum([rectangle(), rectangle()], 2 * u)).toBeCloseTo(share, 4);
		expect(coverageOfSum([{ shape: 'triangular', u }], 2 * u)).toBeCloseTo(share, 4);
	});

	// Closed form of Student's distribution with two degrees of freedom: P(|t| < x) = x/√(2 + x²).
	it('Student, two degrees of freedom', () => {
		for (const x of [1, 2, 4.303])
			expect(coverageOfSum([student(2)], x)).toBeCloseTo(x / Math.hypot(Math.SQRT2, x), 3);
	});

	// t for 95.45 %: JCGM 100:2008, table G.2 (from memory).
	it.each([
		[3, 3.31],
		[4, 2.87],
		[5, 2.65],
		[10, 2.28],
		[20, 2.13],
		[50, 2.05]
	])('Student, %d degrees of freedom: 95.45 %% inside %d', (degreesOfFreedom, t) => {
		expect(Math.abs(boundOfSum([student(degreesOfFreedom)], 0.9545) - t)).toBeLessThan(0.006);
	});

	it('a mixture agrees with a simulation of it', () => {
		const random = seededRandom(11);
		const draws = 200_000;
		let inside = 0;
		for (let i = 0; i < draws; i++) {
			const even = () => Math.sqrt(3) * (2 * random.uniform() - 1);
			if (Math.abs(even() + 0.5 * even() + 0.7 * random.normal()) <= 2) inside += 1;
		}
		// Three standard deviations of the count.
		const share = coverageOfSum([rectangle(), rectangle(0.5), normal(0.7)], 2);
		expect(Math.abs(inside / draws - share)).toBeLessThan(3 * Math.sqrt((share * (1 - share)) / draws));
	});

	it('is whole where nothing contributes, and scales with its unit', () => {
		expect(coverageOfSum([], 0)).toBe(1);
		expect(coverageOfSum([normal(0)], 0)).toBe(1);
		expect(coverageOfSum([normal(1e-6), rectangle(2e-6)], 3e-6)).toBeCloseTo(
			coverageOfSum([normal(1), rectangle(2)], 3),
			10
		);
	});
});
