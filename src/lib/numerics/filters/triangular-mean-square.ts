import type { Section } from './sections';

/**
 * Mean squares of a signal at a lower rate: squares averaged under triangles that overlap by half. A triangle is a running mean
 * taken twice: what lies near the new rate and its multiples, and would fold down to nearly nothing, is met by double zeros.
 * error   a line at f of the squares comes out times sinc²(f/rate), which levelDroop takes back; one at rate − f comes out
 *         times sinc²((rate − f)/rate), nearly (f/rate)²
 * source  common practice (cascaded integrator and comb)
 */
export class TriangularMeanSquare {
	/** Σ x² and Σ of its partial sums over the group under way. */
	private sum = 0;
	private sumOfSums = 0;
	private inGroup = 0;
	/** Rising half of the triangle, of the group before; what it lacks at the very beginning counts as zero. */
	private rising = 0;

	/** factor  samples per mean, whole, at least 1 */
	constructor(private readonly factor: number) {}

	/**
	 * Takes samples[from … to−1] and writes the means they complete to `means`; keeps its state between calls.
	 * means   room for ⌈(to − from)/factor⌉; a NaN among the samples makes the two means NaN whose triangles it lies in
	 * returns how many were written
	 */
	run(samples: Float64Array, from: number, to: number, means: Float64Array): number {
		const { factor } = this;
		// A triangle one sample wide.
		if (factor === 1) {
			for (let i = from; i < to; i++) means[i - from] = samples[i]! * samples[i]!;
			return to - from;
		}
		const share = 1 / (factor * factor);
		let { sum, sumOfSums, inGroup, rising } = this;
		let count = 0;
		for (let i = from; i < to;) {
			const end = Math.min(to, i + factor - inGroup);
			inGroup += end - i;
			for (; i < end; i++) {
				const sample = samples[i]!;
				sum += sample * sample;
				sumOfSums += sum;
			}
			if (inGroup < factor) break;
			means[count++] = (rising + sumOfSums) * share;
			rising = factor * sum - sumOfSums;
			sum = 0;
			sumOfSums = 0;
			inGroup = 0;
		}
		this.sum = sum;
		this.sumOfSums = sumOfSums;
		this.inGroup = inGroup;
		this.rising = rising;
		return count;
	}
}

/**
 * First-order section that takes back the droop of TriangularMeanSquare at low frequencies: y = (1 + e)·x − e·y⁻, with e such
 * that droop and lift agree to the second power of the frequency. What is left is below 1e−6 up to a fortieth of the new rate.
 */
export function levelDroop(factor: number): Section {
	// The triangle lowers by ω²/12·(1 − 1/factor²), the section raises by ω²/2·e/(1 + e)².
	const k = (1 - 1 / (factor * factor)) / 6;
	const e = k === 0 ? 0 : (1 - 2 * k - Math.sqrt(1 - 4 * k)) / (2 * k);
	return { b0: 1 + e, b1: 0, b2: 0, a1: e, a2: 0 };
}
