import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { compensatedSum } from '$lib/numerics/stats/compensated-sum';
import { percentileNearestRank } from '$lib/numerics/stats/percentile-nearest-rank';
import { rootMeanSquare } from '$lib/numerics/stats/root-mean-square';
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
