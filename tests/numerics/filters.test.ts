import { describe, expect, it } from 'vitest';
import {
	bilinear,
	butterworthLowPass,
	joinFirstOrder,
	responseMagnitude,
	SectionCascade
} from '$lib/numerics/filters/sections';
import { levelDroop, TriangularMeanSquare } from '$lib/numerics/filters/triangular-mean-square';
import { seededRandom } from '$lib/synthesis/waveform-random';

const FIRST_ORDER = { n0: 1, n1: 0, n2: 0, d0: 1, d1: 1 / (2 * Math.PI * 10), d2: 0 };
const noise = (length: number) => {
	const random = seededRandom(length);
	return Float64Array.from({ length }, () => random.normal());
};

describe('sections', () => {
	it('match the analogue response at the frequency asked for, and at zero', () => {
		const low = butterworthLowPass(6, 35).map((section) => bilinear(section, 400, 35));
		// A Butterworth low-pass is 3 dB down at its corner, whatever its order (common practice).
		expect(responseMagnitude(low, 400, 35)).toBeCloseTo(Math.SQRT1_2, 12);
		expect(responseMagnitude(low, 400, 0)).toBeCloseTo(1, 12);
		expect(responseMagnitude([bilinear(FIRST_ORDER, 400, 10)], 400, 10)).toBeCloseTo(Math.SQRT1_2, 12);
	});

	it('stay of first order where they are', () => {
		const section = bilinear(FIRST_ORDER, 400, 0);
		expect(section).toMatchObject({ b2: 0, a2: 0 });
		const joined = joinFirstOrder(section, bilinear({ ...FIRST_ORDER, n1: 0.1 }, 400, 0));
		for (const frequency_Hz of [0, 3, 40, 150]) {
			const apart = [section, bilinear({ ...FIRST_ORDER, n1: 0.1 }, 400, 0)];
			expect(responseMagnitude([joined], 400, frequency_Hz)).toBeCloseTo(
				responseMagnitude(apart, 400, frequency_Hz),
				12
			);
		}
	});

	it.each([1, 2, 3, 4])('in a row of %i follow the difference equation, in calls of any size', (length) => {
		const sections = [...butterworthLowPass(6, 35), FIRST_ORDER]
			.slice(-length)
			.map((section) => bilinear(section, 400, 0));
		const input = noise(500);
		let expected = Array.from(input);
		for (const { b0, b1, b2, a1, a2 } of sections) {
			const output: number[] = [];
			expected.forEach((x, n) => {
				const past = (values: readonly number[], by: number) => values[n - by] ?? 0;
				output.push(
					b0 * x +
						b1 * past(expected, 1) +
						b2 * past(expected, 2) -
						a1 * past(output, 1) -
						a2 * past(output, 2)
				);
			});
			expected = output;
		}
		const cascade = new SectionCascade(sections);
		const run = (cuts: readonly number[]) => {
			cascade.reset();
			return cuts.flatMap((cut, i) => {
				const piece = input.slice(cut, cuts[i + 1] ?? input.length);
				cascade.run(piece, piece.length);
				return Array.from(piece);
			});
		};
		const whole = run([0]);
		whole.forEach((value, n) => expect(Math.abs(value - expected[n]!)).toBeLessThan(1e-12));
		expect(run([0, 1, 1, 20, 333])).toEqual(whole);
	});
});

describe('triangular mean squares', () => {
	/** Amplitude of a line of the squares at the lower rate, from a cosine under the root of 1 + 0.5·cos. */
	function lineAt(frequency: number, factor: number): number {
		const length = 400 * factor;
		const samples = Float64Array.from({ length }, (_, n) =>
			Math.sqrt(1 + 0.5 * Math.cos((2 * Math.PI * frequency * n) / factor))
		);
		const means = new Float64Array(length / factor);
		new TriangularMeanSquare(factor).run(samples, 0, length, means);
		let cosine = 0;
		let sine = 0;
		// The first mean lacks its rising half.
		means.subarray(200).forEach((value, n) => {
			cosine += (value - 1) * Math.cos(2 * Math.PI * frequency * n);
			sine += (value - 1) * Math.sin(2 * Math.PI * frequency * n);
		});
		return Math.hypot(cosine, sine) / 100 / 0.5;
	}

	it.each([1, 2, 4, 9])('thinned by %i keep slow lines when their droop is levelled', (factor) => {
		for (const frequency of [0.005, 0.01, 0.025]) {
			const levelled = lineAt(frequency, factor) * responseMagnitude([levelDroop(factor)], 1, frequency);
			expect(Math.abs(levelled - 1)).toBeLessThan(2e-6);
		}
	});

	it.each([2, 4, 9])('thinned by %i press down what would fold onto slow lines, twice over', (factor) => {
		for (const frequency of [0.005, 0.01, 0.025])
			expect(lineAt(1 - frequency, factor)).toBeLessThan(2.5 * frequency ** 2);
	});

	it('do not hang on how the samples are cut, and spread a missing one over its two triangles', () => {
		const samples = noise(103);
		const run = (cuts: readonly number[], given = samples) => {
			const thinner = new TriangularMeanSquare(5);
			return cuts.flatMap((cut, i) => {
				const out = new Float64Array(40);
				return Array.from(out.subarray(0, thinner.run(given, cut, cuts[i + 1] ?? given.length, out)));
			});
		};
		const whole = run([0]);
		expect(whole).toHaveLength(20);
		expect(run([0, 1, 4, 5, 5, 57, 100])).toEqual(whole);
		const holed = samples.slice();
		holed[52] = NaN;
		const missing = run([0], holed).flatMap((value, i) => (Number.isNaN(value) ? [i] : []));
		expect(missing).toEqual([10, 11]);
	});
});
