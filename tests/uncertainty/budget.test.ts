import { describe, expect, it } from 'vitest';
import { combine, coverageOf, factorFor95, shareOfVariance } from '$lib/uncertainty/budget';
import { bounded, certified, computed, observed } from '$lib/uncertainty/contribution';

const input = (stated: number, sensitivity = 1) =>
	({ source: 'sensor-ratio', stated, statedIn: 'unit of the figure', sensitivity }) as const;

// End-gauge calibration, JCGM 100:2008, annex H.1 (figures from memory): contributions of 25, 9.7, 2.9 and 16.6 nm with
// 18, 25.6, 50 and 2 degrees of freedom combine to 32 nm with 16.
describe('the end gauge of the guide', () => {
	const budget = combine([
		observed(input(25), 18),
		observed(input(9.7), 25.6),
		observed(input(2.9), 50),
		observed(input(16.6), 2)
	]);

	it('combines to 32 nm with 16 effective degrees of freedom', () => {
		expect(Math.round(budget.u)).toBe(32);
		expect(Math.floor(budget.effectiveDegreesOfFreedom)).toBe(16);
		expect(budget.U).toBeCloseTo(2 * budget.u, 12);
	});

	it('shows what each contributes', () => {
		const shares = budget.contributions.map((one) => shareOfVariance(budget, one));
		expect(shares.reduce((sum, share) => sum + share, 0)).toBeCloseTo(1, 12);
		expect(shares[0]).toBeCloseTo(625 / 1003.06, 4);
	});
});

// Divisors: JCGM 100:2008, 4.3.3 (certificate), 4.3.7 (rectangle) and 4.3.9 (triangle).
describe('one contribution', () => {
	it('becomes a standard uncertainty by its distribution and its sensitivity', () => {
		expect(bounded(input(3)).u).toBeCloseTo(Math.sqrt(3), 12);
		expect(bounded(input(6), 'triangular').u).toBeCloseTo(Math.sqrt(6), 12);
		expect(certified(input(0.9), 3).u).toBeCloseTo(0.3, 12);
		expect(computed(input(2, -0.5)).u).toBe(1);
		expect(bounded(input(3)).degreesOfFreedom).toBeNull();
	});
});

describe('what ±2u holds', () => {
	it('everything where one bound stands alone, with k = 1.65 for 95 %', () => {
		const budget = combine([bounded(input(5))]);
		expect(coverageOf(budget)).toBe(1);
		// 0.95·√3
		expect(factorFor95(budget)).toBeCloseTo(0.95 * Math.sqrt(3), 3);
		expect(budget.effectiveDegreesOfFreedom).toBe(Infinity);
	});

	it('95.45 % of a normal distribution, and less when it rests on few readings', () => {
		expect(coverageOf(combine([certified(input(1), 2)]))).toBeCloseTo(0.9545, 4);
		// Student, two degrees of freedom: 2/√6.
		expect(coverageOf(combine([observed(input(1), 2)]))).toBeCloseTo(2 / Math.sqrt(6), 3);
	});

	it('nothing to say of an exact figure', () => {
		const exact = combine([]);
		expect(exact).toMatchObject({ u: 0, U: 0 });
		expect(coverageOf(exact)).toBe(1);
		expect(factorFor95(exact)).toBeNaN();
	});
});

it('a source that is not known leaves no expanded uncertainty, only its known part', () => {
	const budget = combine([certified(input(1), 2)], ['transformer-response']);
	expect(budget).toMatchObject({ U: null, knownPart: 1 });
});
