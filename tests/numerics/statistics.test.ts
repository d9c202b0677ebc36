import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { compensatedSum } from '$lib/numerics/stats/compensated-sum';
import { interpolatedPercentile } from '$lib/numerics/stats/interpolated-percentile';
import {
	percentileNearestRank,
	selectPercentileNearestRank
} from '$lib/numerics/stats/percentile-nearest-rank';
import { rootMeanSquare } from '$lib/numerics/stats/root-mean-square';
import { selectRank } from '$lib/numerics/stats/select-rank';
import { windowedPeak, windowedRms } from '$lib/numerics/stats/windowed-rms';

describe('percentile by nearest rank', () => {
	// Hyndman & Fan, The American Statistician 50(4), 1996, type 1: integers 1 … 200, p = 0.95 gives 190
	// (types 5, 6, 7 would give 190.5, 190.95, 190.05).
	it('the 95th of 1 … 200 is 190, not an interpolated value', () => {
		const values = Float64Array.from({ length: 200 }, (_, i) => i + 1);
		expect(percentileNearestRank(values, 0.95)).toBe(190);
	});

	it('takes rank ceil(p·n) for every whole percentile, whatever binary fractions do', () => {
		for (let n = 1; n <= 300; n++) {
			const values = Float64Array.from({ length: n }, (_, i) => i + 1);
			for (let percent = 1; percent <= 100; percent++) {
				expect(percentileNearestRank(values, percent / 100)).toBe(Math.ceil((percent * n) / 100));
			}
		}
	});

	it('has no value for an empty set', () => {
		expect(percentileNearestRank(new Float64Array(0), 0.95)).toBeNaN();
	});
});

describe('percentile without a sort', () => {
	const values = fc.oneof(
		fc.array(fc.double({ min: 0, max: 100, noNaN: true }), { minLength: 1, maxLength: 400 }),
		// Many equal values, as a recorder with few digits gives them.
		fc.array(fc.integer({ min: 0, max: 5 }), { minLength: 1, maxLength: 400 })
	);

	it('is the same value that sorting gives, at every percentile', () => {
		fc.assert(
			fc.property(values, fc.integer({ min: 1, max: 100 }), (list, percent) => {
				const sorted = Float64Array.from(list).sort();
				const value = selectPercentileNearestRank(Float64Array.from(list), percent / 100);
				expect(value === percentileNearestRank(sorted, percent / 100)).toBe(true);
			}),
			{ seed: 11, numRuns: 500 }
		);
	});

	it('leaves the same values, nothing before the place greater and nothing behind it less', () => {
		fc.assert(
			fc.property(values, fc.nat(), (list, any) => {
				const array = Float64Array.from(list);
				const place = any % array.length;
				const value = selectRank(array, place);
				expect(array[place]).toBe(value);
				expect(
					array.every((other, i) => (i < place ? other <= value : i > place ? other >= value : true))
				).toBe(true);
				expect([...array].sort((a, b) => a - b)).toEqual([...list].sort((a, b) => a - b));
			}),
			{ seed: 12, numRuns: 300 }
		);
	});

	// Orders that make plain pivots quadratic: sorted, reversed, organ pipe, equal, two values alternating, a saw.
	it.each([
		['ascending', (i: number) => i],
		['descending', (i: number) => -i],
		['rising and falling', (i: number, n: number) => Math.min(i, n - i)],
		['equal', () => 1],
		['two values', (i: number) => i % 2],
		['a saw', (i: number) => i % 17]
	] as const)('of 50 000 values %s', (_, of) => {
		const n = 50_000;
		const list = Float64Array.from({ length: n }, (_v, i) => of(i, n));
		const sorted = list.slice().sort();
		for (const p of [0.0001, 0.05, 0.5, 0.95, 0.99, 1])
			expect(selectPercentileNearestRank(list.slice(), p)).toBe(percentileNearestRank(sorted, p));
	});

	it('has no value for an empty set and no place outside', () => {
		expect(selectPercentileNearestRank(new Float64Array(0), 0.95)).toBeNaN();
		expect(() => selectRank(Float64Array.of(1, 2), 2)).toThrow(RangeError);
		expect(() => selectRank(Float64Array.of(1, 2), NaN)).toThrow(RangeError);
	});
});

describe('interpolated percentiles', () => {
	// Hyndman & Fan, The American Statistician 50(4), 1996: the 95th of 1 … 200 is 190.5 (type 5), 190.95 (6), 190.05 (7).
	it.each([
		[5, 190.5],
		[6, 190.95],
		[7, 190.05]
	] as const)('type %d of 1 … 200 gives %d', (type, expected) => {
		const list = Float64Array.from({ length: 200 }, (_, i) => i + 1);
		expect(Math.abs(interpolatedPercentile(list, 0.95, type) - expected)).toBeLessThan(1e-9);
	});

	it('all agree on the median of an odd count, and stay within the values', () => {
		const list = Float64Array.of(1, 2, 7, 10, 11);
		for (const type of [5, 6, 7] as const) {
			expect(interpolatedPercentile(list, 0.5, type)).toBe(7);
			expect(interpolatedPercentile(list, 0.999, type)).toBeLessThanOrEqual(11);
			expect(interpolatedPercentile(list, 0.001, type)).toBeGreaterThanOrEqual(1);
			expect(interpolatedPercentile(Float64Array.of(4), 0.95, type)).toBe(4);
			expect(interpolatedPercentile(new Float64Array(0), 0.95, type)).toBeNaN();
		}
	});

	it('enclose the nearest rank within one value to either side', () => {
		fc.assert(
			fc.property(
				fc.array(fc.double({ min: 0, max: 10, noNaN: true }), { minLength: 2, maxLength: 60 }),
				(list) => {
					const sorted = Float64Array.from(list).sort();
					const place = Math.ceil(0.95 * sorted.length - 1e-9) - 1;
					for (const type of [5, 6, 7] as const) {
						const value = interpolatedPercentile(sorted, 0.95, type);
						expect(value).toBeGreaterThanOrEqual(sorted[Math.max(0, place - 1)]!);
						expect(value).toBeLessThanOrEqual(sorted[Math.min(sorted.length - 1, place + 1)]!);
					}
				}
			),
			{ seed: 13, numRuns: 200 }
		);
	});
});

describe('root mean square', () => {
	// IEC 61000-4-30, 4.5 / IEEE Std 519, 4.2: fourteen windows at 3 % and one at 10 % aggregate to 3.88158043414 %,
	// not to their mean of 3.467 % (derived from the definition).
	it('aggregates fifteen windows by squares', () => {
		const values = Float64Array.from([...new Array<number>(14).fill(3), 10]);
		expect(Math.abs(rootMeanSquare(values) - 3.88158043414)).toBeLessThan(1e-10);
	});

	it('leaves nothing out silently: one missing value makes the result missing', () => {
		expect(rootMeanSquare(Float64Array.of(1, NaN, 3))).toBeNaN();
		expect(rootMeanSquare(new Float64Array(0))).toBeNaN();
	});
});

describe('compensated sum', () => {
	it('keeps what plain addition loses', () => {
		expect(compensatedSum(Float64Array.of(1, 1e100, 1, -1e100))).toBe(2);
	});

	it('of tenths is exact to the last place', () => {
		expect(compensatedSum(new Float64Array(10_000_000).fill(0.1))).toBe(1_000_000);
	});

	it('does not depend on the sign of the whole', () => {
		fc.assert(
			fc.property(fc.array(fc.double({ min: -1e6, max: 1e6, noNaN: true }), { maxLength: 200 }), (values) => {
				const plus = compensatedSum(Float64Array.from(values));
				const minus = compensatedSum(Float64Array.from(values, (v) => -v));
				expect(plus + minus).toBe(0);
			}),
			{ seed: 7, numRuns: 100 }
		);
	});
});

describe('rms and peak of a span between samples', () => {
	it('of whole cycles of a sine is peak/√2 wherever the span begins, within the stated error', () => {
		const perCycle = 128.37;
		const samples = Float64Array.from({ length: 3000 }, (_, n) => 5 * Math.cos((2 * Math.PI * n) / perCycle));
		for (let start = 3; start < 200; start += 13.31) {
			const rms = windowedRms(samples, start, start + 10 * perCycle);
			expect(Math.abs(rms / (5 / Math.SQRT2) - 1)).toBeLessThan(1e-6);
		}
		expect(windowedPeak(samples, 100, 1400)).toBeGreaterThan(4.999);
	});

	it('is missing when a sample inside is missing', () => {
		const samples = new Float64Array(50).fill(1);
		samples[20] = NaN;
		expect(windowedRms(samples, 10.5, 30.5)).toBeNaN();
		expect(windowedPeak(samples, 10, 30)).toBeNaN();
		expect(windowedRms(samples, 21.5, 40)).toBeCloseTo(1, 12);
	});
});
