import fc from 'fast-check';
import { complex, fft, type Complex } from 'mathjs';
import { describe, expect, it } from 'vitest';
import { executeRealDft, planRealDft } from '$lib/numerics/dft/real-dft';
import { lineMean, linePhase_rad, readLineRms } from '$lib/numerics/dft/spectral-lines';
import { seededRandom } from '$lib/synthesis/waveform-random';

const SEED = 20240519;

function noise(length: number, seed: number): Float64Array {
	const random = seededRandom(seed);
	return Float64Array.from({ length }, () => random.normal());
}

function transform(samples: Float64Array): number[] {
	const plan = planRealDft(samples.length);
	executeRealDft(plan, samples);
	return plan.spectrum.slice(0, 2 * plan.lineCount);
}

/** Even, odd, prime and powers of two. */
const LENGTHS = [2, 3, 8, 15, 16, 97, 100, 256, 1000, 2048, 2559];

describe('the DFT against its definition and against another library', () => {
	it.each(LENGTHS)('N = %i equals the sum of the definition (convention.md) term by term', (length) => {
		const samples = noise(length, SEED + length);
		const spectrum = transform(samples);
		const scale = Math.sqrt(length);
		for (let k = 0; k <= Math.floor(length / 2); k += Math.max(1, Math.floor(length / 40))) {
			let re = 0;
			let im = 0;
			for (let n = 0; n < length; n++) {
				const angle = (2 * Math.PI * ((k * n) % length)) / length;
				re += samples[n]! * Math.cos(angle);
				im -= samples[n]! * Math.sin(angle);
			}
			// Noise of unit variance has lines of about √N; 1e-12 of that is far above rounding, far below any mistake.
			expect(Math.abs(spectrum[2 * k]! - re)).toBeLessThan(1e-12 * scale * 10);
			expect(Math.abs(spectrum[2 * k + 1]! - im)).toBeLessThan(1e-12 * scale * 10);
		}
	});

	it.each([16, 100, 256, 1001, 2048])(
		'N = %i equals mathjs fft within 1e-9 of the largest line',
		(length) => {
			const samples = noise(length, SEED - length);
			const spectrum = transform(samples);
			const other = fft(Array.from(samples, (value) => complex(value, 0))) as unknown as Complex[];
			const largest = Math.max(...other.map((z) => Math.hypot(z.re, z.im)));
			for (let k = 0; k <= Math.floor(length / 2); k++) {
				expect(Math.abs(spectrum[2 * k]! - other[k]!.re)).toBeLessThan(1e-9 * largest);
				expect(Math.abs(spectrum[2 * k + 1]! - other[k]!.im)).toBeLessThan(1e-9 * largest);
			}
		}
	);

	it('refuses a length that is no whole number of at least 2', () => {
		expect(() => planRealDft(1)).toThrow(RangeError);
		expect(() => planRealDft(10.5)).toThrow(RangeError);
	});
});

describe('what every transform must obey', () => {
	const lengths = fc.constantFrom(4, 9, 16, 25, 64, 101, 128);

	it('linearity: the transform of a·x + b·y is a·X + b·Y', () => {
		fc.assert(
			fc.property(
				lengths,
				fc.integer({ min: 0, max: 1e6 }),
				fc.double({ min: -50, max: 50, noNaN: true }),
				fc.double({ min: -50, max: 50, noNaN: true }),
				(length, seed, a, b) => {
					const x = noise(length, seed);
					const y = noise(length, seed + 7919);
					const mixed = transform(x.map((value, n) => a * value + b * y[n]!));
					const separate = transform(x).map((value, i) => a * value + b * transform(y)[i]!);
					mixed.forEach((value, i) => expect(Math.abs(value - separate[i]!)).toBeLessThan(1e-9));
				}
			),
			{ seed: SEED, numRuns: 40 }
		);
	});

	it('time shift: turning the samples round by s multiplies line k by exp(−j2πks/N)', () => {
		fc.assert(
			fc.property(lengths, fc.integer({ min: 0, max: 1e6 }), fc.nat(200), (length, seed, shift) => {
				const x = noise(length, seed);
				const turned = Float64Array.from(x, (_, n) => x[(((n - shift) % length) + length) % length]!);
				const before = transform(x);
				const after = transform(turned);
				for (let k = 0; 2 * k < before.length; k++) {
					const angle = (-2 * Math.PI * ((k * shift) % length)) / length;
					const re = before[2 * k]! * Math.cos(angle) - before[2 * k + 1]! * Math.sin(angle);
					const im = before[2 * k]! * Math.sin(angle) + before[2 * k + 1]! * Math.cos(angle);
					expect(Math.abs(after[2 * k]! - re)).toBeLessThan(1e-10);
					expect(Math.abs(after[2 * k + 1]! - im)).toBeLessThan(1e-10);
				}
			}),
			{ seed: SEED, numRuns: 40 }
		);
	});

	it('energy (Parseval): the squares of the one-sided rms lines add up to the mean square', () => {
		fc.assert(
			fc.property(lengths, fc.integer({ min: 0, max: 1e6 }), (length, seed) => {
				const x = noise(length, seed);
				const plan = planRealDft(length);
				executeRealDft(plan, x);
				const lines = new Float64Array(plan.lineCount);
				readLineRms(plan, lines, plan.lineCount);
				const energy = lines.reduce((sum, value) => sum + value * value, 0);
				const meanSquare = x.reduce((sum, value) => sum + value * value, 0) / length;
				expect(Math.abs(energy / meanSquare - 1)).toBeLessThan(1e-11);
			}),
			{ seed: SEED, numRuns: 60 }
		);
	});

	it.each([64, 63])('impulse: every line of a unit impulse at 0 is 1 (N = %i)', (length) => {
		const x = new Float64Array(length);
		x[0] = 1;
		transform(x).forEach((value, i) => expect(Math.abs(value - (i % 2 === 0 ? 1 : 0))).toBeLessThan(1e-13));
	});

	it.each([128, 125])('a tone of rms 7 and phase 40° reads rms 7 and 40° on its line (N = %i)', (length) => {
		const x = Float64Array.from(
			{ length },
			(_, n) => -2 + 7 * Math.SQRT2 * Math.cos((2 * Math.PI * 5 * n) / length + (40 * Math.PI) / 180)
		);
		const plan = planRealDft(length);
		executeRealDft(plan, x);
		const lines = new Float64Array(plan.lineCount);
		readLineRms(plan, lines, plan.lineCount);
		expect(Math.abs(lines[5]! - 7)).toBeLessThan(1e-12);
		expect(Math.abs((linePhase_rad(plan, 5) * 180) / Math.PI - 40)).toBeLessThan(1e-10);
		expect(Math.abs(lineMean(plan) + 2)).toBeLessThan(1e-12);
		expect(lines[6]!).toBeLessThan(1e-12);
	});
});
