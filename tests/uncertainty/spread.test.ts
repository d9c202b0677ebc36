import { describe, expect, it } from 'vitest';
import { seededRandom } from '$lib/synthesis/waveform-random';
import { spreadOfMean, spreadOfPercentile, spreadOfSingle } from '$lib/uncertainty/spread';

describe('spread that readings show', () => {
	// s² = Σ(x − mean)²/(n − 1), s/√n: JCGM 100:2008, 4.2.2 and 4.2.3; by hand for 1, 2, 3, 6.
	it('of a mean', () => {
		const spread = spreadOfMean([1, 2, NaN, 3, 6]);
		expect(spread?.u).toBeCloseTo(Math.sqrt(14 / 3 / 4), 12);
		expect(spread?.degreesOfFreedom).toBe(3);
		expect(spreadOfMean([1, NaN])).toBeNull();
	});

	it('of a single value is that of the noise and not of a slow change', () => {
		const random = seededRandom(4);
		const noisy = Array.from({ length: 2000 }, (_, i) => i / 200 + 0.05 * random.normal());
		const u = spreadOfSingle(noisy)!.u;
		expect(Math.abs(u / 0.05 - 1)).toBeLessThan(0.06);
		expect(spreadOfSingle([3, NaN, 3, 3])?.u).toBe(0);
		expect(spreadOfSingle([3])).toBeNull();
	});
});

describe('spread of a percentile', () => {
	const random = seededRandom(9);
	const period = () => Float64Array.from({ length: 1000 }, () => 5 + random.normal());
	const percentile = (values: Float64Array) => values.toSorted()[Math.ceil(0.95 * values.length) - 1]!;

	it('is none when the whole period was measured', () => {
		expect(spreadOfPercentile(period(), 0.95, 1)).toBeNull();
	});

	it.each([0.9, 0.6, 0.3])('is what leaving intervals out at random does to it: %d measured', (coverage) => {
		const trials = 1500;
		let squares = 0;
		let told = 0;
		for (let trial = 0; trial < trials; trial++) {
			const whole = period();
			const kept = whole.filter(() => random.uniform() < coverage);
			squares += (percentile(kept) - percentile(whole)) ** 2 / trials;
			told += spreadOfPercentile(kept, 0.95, coverage)!.u ** 2 / trials;
		}
		expect(Math.abs(Math.sqrt(told / squares) - 1)).toBeLessThan(0.15);
	});
});
