/**
 * Both implementations of SignalKernels against definitions written out here (sums of the discrete Fourier transform,
 * band-limited signals known in closed form, raw values by DataView), against mathjs's fft, and against each other.
 */
import fc from 'fast-check';
import { complex, fft, type Complex } from 'mathjs';
import { describe, expect, it } from 'vitest';
import { createSignalKernels } from '$lib/numerics/kernels/create-kernels';
import { createScriptKernels } from '$lib/numerics/kernels/script-kernels';
import type { KernelShape, RawFormat, RowLayout, SignalKernels } from '$lib/numerics/kernels/signal-kernels';
import { createWasmKernels, wasmKernelsRun } from '$lib/numerics/kernels/wasm-kernels';
import { designKaiserKernel, kaiserKernelFunction } from '$lib/numerics/resample/kaiser-kernel';
import { seededRandom } from '$lib/synthesis/waveform-random';

const SEED = 20240611;
/** 24 taps; and one of 14, no whole number of vectors of eight. */
const KERNEL = designKaiserKernel(0.2072, 0.5621, 120);
const SHORT_KERNEL = designKaiserKernel(0.1, 0.75, 120);
const FORMS = [
	['script', createScriptKernels],
	['WebAssembly', createWasmKernels]
] as const;
const FORMATS: [RawFormat, { lowestIsValue?: boolean }][] = [
	['int16', {}],
	['int32', {}],
	['float32', {}],
	['uint8', {}],
	['int16', { lowestIsValue: true }],
	['int24', {}],
	['int32', { lowestIsValue: true }],
	['float64', {}]
];
const VALUE_BYTES = { uint8: 1, int16: 2, int24: 3, int32: 4, float32: 4, float64: 8 };

function shapeOf(changes: Partial<KernelShape>): KernelShape {
	return {
		channelCount: 2,
		capacity: 400,
		points: 256,
		lineCount: 129,
		kernel: KERNEL,
		rawCapacity: 0,
		...changes
	};
}

function fillWithNoise(kernels: SignalKernels, seed: number): void {
	kernels.samples.forEach((values, c) => {
		const random = seededRandom(seed + 7919 * c);
		for (let i = 0; i < values.length; i++) values[i] = random.normal();
	});
}

/** Line k of real points by the defining sum; the angle is reduced first, so that it stays exact. */
function lineBySum(points: Float64Array, k: number): [number, number] {
	let re = 0;
	let im = 0;
	points.forEach((value, n) => {
		const angle = (2 * Math.PI * ((k * n) % points.length)) / points.length;
		re += value * Math.cos(angle);
		im -= value * Math.sin(angle);
	});
	return [re, im];
}

function largestOf(lines: Float64Array): number {
	return lines.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
}

/** A start and step that use the whole buffer but for the last fraction. */
function widestWindow(kernels: SignalKernels, startFraction: number): { start: number; step: number } {
	const { capacity, points } = kernels.shape;
	const start = kernels.guard + startFraction;
	return { start, step: (capacity - 1 - kernels.guard - start) / (points - 1) - 1e-9 };
}

describe.each(FORMS)('signal kernels in %s', (_form, create) => {
	it.each([64, 128, 256, 512, 1024, 2048, 4096, 8192, 16384])(
		'transform %i points of noise as the defining sum does, within 1e-12 of the largest line',
		(points) => {
			const kernels = create(shapeOf({ points, lineCount: points / 2 + 1, capacity: points + 80 }));
			fillWithNoise(kernels, SEED + points);
			const { start, step } = widestWindow(kernels, 0.3);
			kernels.transformWindow(start, step);
			const lines = new Set([0, 1, 2, 3, points / 4, points / 2 - 1, points / 2]);
			for (let k = 5; k < points / 2; k += Math.ceil(points / 40)) lines.add(k);
			kernels.spectra.forEach((spectrum, c) => {
				const tolerance = 1e-12 * largestOf(spectrum);
				for (const k of lines) {
					const [re, im] = lineBySum(kernels.windows[c]!, k);
					expect(Math.abs(spectrum[2 * k]! - re)).toBeLessThan(tolerance);
					expect(Math.abs(spectrum[2 * k + 1]! - im)).toBeLessThan(tolerance);
				}
			});
		}
	);

	it('agree with mathjs’s fft on every line of a block', () => {
		const kernels = create(shapeOf({ points: 512, lineCount: 257, capacity: 700, channelCount: 3 }));
		fillWithNoise(kernels, SEED);
		const { start, step } = widestWindow(kernels, 0.77);
		kernels.transformWindow(start, step);
		kernels.spectra.forEach((spectrum, c) => {
			const other = fft(
				Array.from(kernels.windows[c]!, (value) => complex(value, 0))
			) as unknown as Complex[];
			const tolerance = 1e-12 * largestOf(spectrum);
			for (let k = 0; k < 257; k++) {
				expect(Math.abs(spectrum[2 * k]! - other[k]!.re)).toBeLessThan(tolerance);
				expect(Math.abs(spectrum[2 * k + 1]! - other[k]!.im)).toBeLessThan(tolerance);
			}
		});
	});

	it.each([64, 128, 1024, 2048])('keep the energy of a window of %i points (Parseval)', (points) => {
		const kernels = create(shapeOf({ points, lineCount: points / 2 + 1, capacity: points + 50 }));
		fillWithNoise(kernels, SEED + 1);
		const { start, step } = widestWindow(kernels, 0);
		kernels.transformWindow(start, step);
		kernels.spectra.forEach((spectrum, c) => {
			const squares = kernels.windows[c]!.reduce((sum, value) => sum + value * value, 0);
			let energy = 0;
			for (let k = 0; k <= points / 2; k++) {
				const share = k === 0 || k === points / 2 ? 1 : 2;
				energy += share * (spectrum[2 * k]! ** 2 + spectrum[2 * k + 1]! ** 2);
			}
			expect(Math.abs(energy / points / squares - 1)).toBeLessThan(1e-13);
		});
	});

	it.each([KERNEL, SHORT_KERNEL])(
		'interpolate as the kernel’s own sum does (half width $halfWidth)',
		(kernel) => {
			const kernels = create(shapeOf({ kernel }));
			const weightAt = kaiserKernelFunction(kernel);
			fillWithNoise(kernels, SEED + 2);
			const { start, step } = widestWindow(kernels, 0.123);
			kernels.transformWindow(start, step);
			kernels.windows.forEach((window, c) => {
				for (let m = 0; m < window.length; m++) {
					const position = start + m * step;
					let sum = 0;
					for (let n = Math.floor(position) - 30; n < position + 30; n++) {
						sum += (kernels.samples[c]![n] ?? 0) * weightAt(n - position);
					}
					// Straight lines between 2048 rows: 3e-7 of the signal at most (interpolator.ts); noise reaches 4.
					expect(Math.abs(window[m]! - sum)).toBeLessThan(3e-6);
				}
			});
		}
	);

	it('read a tone between the samples: its rms on its line, nothing elsewhere', () => {
		const kernels = create(shapeOf({ capacity: 2700, points: 2048, lineCount: 511, channelCount: 1 }));
		const start = kernels.guard + 0.41;
		const step = 2562.3 / 2048;
		const values = kernels.samples[0]!;
		for (let i = 0; i < values.length; i++) {
			values[i] = 7 * Math.SQRT2 * Math.cos((2 * Math.PI * 50 * (i - start)) / 2562.3 + (40 * Math.PI) / 180);
		}
		kernels.transformWindow(start, step);
		const spectrum = kernels.spectra[0]!;
		const rms = (k: number) => (Math.SQRT2 * Math.hypot(spectrum[2 * k]!, spectrum[2 * k + 1]!)) / 2048;
		expect(Math.abs(rms(50) / 7 - 1)).toBeLessThan(2e-6);
		expect((Math.atan2(spectrum[101]!, spectrum[100]!) * 180) / Math.PI).toBeCloseTo(40, 5);
		for (let k = 0; k < 511; k++) if (k !== 50) expect(rms(k) / 7).toBeLessThan(2e-6);
	});

	it('a missing sample silences its own channel where the kernel reaches it, and no other', () => {
		for (const missingChannel of [0, 1, 2, 6]) {
			const kernels = create(shapeOf({ channelCount: 7 }));
			fillWithNoise(kernels, SEED + 3);
			const { start, step } = widestWindow(kernels, 0.5);
			kernels.transformWindow(start, step);
			const before = kernels.spectra.map((spectrum) => spectrum.slice());
			kernels.samples[missingChannel]![200] = NaN;
			kernels.transformWindow(start, step);
			kernels.spectra.forEach((spectrum, c) => {
				if (c === missingChannel) expect(spectrum.every(Number.isNaN)).toBe(true);
				else expect(spectrum).toEqual(before[c]);
			});
			// Out of reach: samples before the first tap and after the last one are not touched.
			fillWithNoise(kernels, SEED + 3);
			kernels.samples[missingChannel]![0] = NaN;
			kernels.transformWindow(start + 1, step - 1.01 / (kernels.shape.points - 1));
			expect(kernels.spectra[missingChannel]!.some(Number.isNaN)).toBe(false);
		}
	});

	it('a large channel leaves no trace in a small one beside it', () => {
		const kernels = create(shapeOf({ channelCount: 2 }));
		fillWithNoise(kernels, SEED + 4);
		for (let i = 0; i < kernels.shape.capacity; i++) kernels.samples[0]![i]! *= 1e12;
		const { start, step } = widestWindow(kernels, 0.5);
		kernels.transformWindow(start, step);
		const spectrum = kernels.spectra[1]!;
		for (let k = 0; k < 129; k += 16) {
			const [re, im] = lineBySum(kernels.windows[1]!, k);
			expect(Math.hypot(spectrum[2 * k]! - re, spectrum[2 * k + 1]! - im)).toBeLessThan(
				1e-12 * largestOf(spectrum)
			);
		}
	});

	it.each(FORMATS)('decode rows of %s, missing values as NaN, %j', (format, marks) => {
		fc.assert(
			fc.property(
				fc.integer({ min: 1, max: 9 }),
				fc.integer({ min: 0, max: 150 }),
				fc.integer({ min: 0, max: 20 }),
				fc.integer({ min: 0, max: 5 }),
				fc.boolean(),
				fc.integer({ min: 0, max: 1e6 }),
				(channelCount, count, at, head, shuffled, seed) => {
					const random = seededRandom(seed);
					const bytes = VALUE_BYTES[format];
					const rowBytes = head + (channelCount + 1) * bytes + (seed % 3);
					const kernels = create(
						shapeOf({ channelCount, capacity: 180, rawCapacity: count * rowBytes + (seed % 5) })
					);
					const order = Array.from({ length: channelCount }, (_, c) => (shuffled ? channelCount - c : c));
					const layout: RowLayout = {
						format,
						...marks,
						rowBytes,
						offsets: order.map((place) => head + place * bytes),
						factors: order.map(() => random.normal()),
						additions: order.map(() => 100 * random.normal())
					};
					const view = new DataView(kernels.raw.buffer, kernels.raw.byteOffset, kernels.raw.byteLength);
					for (let i = 0; i < kernels.raw.length; i++) kernels.raw[i] = Math.floor(256 * random.uniform());
					fillWithNoise(kernels, seed);
					const before = kernels.samples.map((values) => values.slice());
					const expected = layout.offsets.map((offset, c) =>
						Array.from({ length: count }, (_, row) => {
							const place = row * rowBytes + offset;
							const missing = random.uniform() < 0.1;
							const factor = layout.factors[c]!;
							const addition = layout.additions[c]!;
							if (format === 'int16') {
								if (missing) view.setInt16(place, -32768, true);
								const value = view.getInt16(place, true);
								return value === -32768 && !marks.lowestIsValue ? NaN : factor * value + addition;
							}
							if (format === 'int32') {
								if (missing) view.setInt32(place, -2147483648, true);
								const value = view.getInt32(place, true);
								return value === -2147483648 && !marks.lowestIsValue ? NaN : factor * value + addition;
							}
							if (format === 'uint8') return factor * view.getUint8(place) + addition;
							if (format === 'int24') {
								const [low, middle, high] = [0, 1, 2].map((byte) => view.getUint8(place + byte));
								const value = low! + 256 * middle! + 65_536 * high!;
								return factor * (value < 2 ** 23 ? value : value - 2 ** 24) + addition;
							}
							if (format === 'float64') {
								if (missing) view.setFloat64(place, [NaN, Infinity, -Infinity][row % 3]!, true);
								const value = view.getFloat64(place, true);
								return Number.isFinite(value) ? factor * value + addition : NaN;
							}
							if (missing) view.setFloat32(place, [NaN, Infinity, -Infinity][row % 3]!, true);
							const value = view.getFloat32(place, true);
							return Number.isFinite(value) ? factor * value + addition : NaN;
						})
					);
					kernels.decodeRows(layout, count, at);
					kernels.samples.forEach((values, c) => {
						const wanted = before[c]!;
						wanted.set(expected[c]!, at);
						expect(values).toEqual(wanted);
					});
				}
			),
			{ seed: SEED, numRuns: 60 }
		);
	});

	it('refuse rows that do not fit', () => {
		const kernels = create(shapeOf({ channelCount: 1, rawCapacity: 40, capacity: 60 }));
		const layout: RowLayout = { format: 'int32', rowBytes: 8, offsets: [4], factors: [1], additions: [0] };
		expect(() => kernels.decodeRows(layout, 5, 55)).not.toThrow();
		expect(() => kernels.decodeRows(layout, 6, 0)).toThrow(RangeError);
		expect(() => kernels.decodeRows(layout, 5, 56)).toThrow(RangeError);
		expect(() => kernels.decodeRows({ ...layout, offsets: [5] }, 1, 0)).toThrow(RangeError);
		expect(() => kernels.decodeRows({ ...layout, offsets: [-1] }, 1, 0)).toThrow(RangeError);
	});

	it('slide samples to the front, over themselves', () => {
		const kernels = create(shapeOf({ channelCount: 3, capacity: 101 }));
		fillWithNoise(kernels, SEED + 5);
		const before = kernels.samples.map((values) => values.slice());
		kernels.slide(13, 80);
		kernels.samples.forEach((values, c) => {
			expect(values.slice(0, 80)).toEqual(before[c]!.slice(13, 93));
			expect(values.slice(80)).toEqual(before[c]!.slice(80));
		});
		kernels.slide(0, 101);
		expect(kernels.samples[2]!.slice(0, 80)).toEqual(before[2]!.slice(13, 93));
	});

	it('sum squares and find the extremes of any stretch', () => {
		const kernels = create(shapeOf({ channelCount: 2, capacity: 300 }));
		fillWithNoise(kernels, SEED + 6);
		fc.assert(
			fc.property(fc.nat(1), fc.nat(300), fc.nat(300), (channel, one, two) => {
				const [from, to] = [Math.min(one, two), Math.max(one, two)];
				const values = [...kernels.samples[channel]!.slice(from, to)];
				const { squares, least, greatest } = kernels.stretch(channel, from, to);
				const expected = values.reduce((sum, value) => sum + value * value, 0);
				expect(Math.abs(squares - expected)).toBeLessThanOrEqual(1e-13 * expected);
				expect(least).toBe(Math.min(...values));
				expect(greatest).toBe(Math.max(...values));
			}),
			{ seed: SEED, numRuns: 200 }
		);
		for (const missing of [20, 27, 33]) {
			fillWithNoise(kernels, SEED + 6);
			kernels.samples[1]![missing] = NaN;
			expect(kernels.stretch(1, 20, 34)).toEqual({ squares: NaN, least: NaN, greatest: NaN });
			expect(kernels.stretch(0, 20, 34).squares).toBeGreaterThan(0);
			expect(kernels.stretch(1, missing + 1, 60).squares).toBeGreaterThan(0);
		}
	});

	it('leave the buffers where they are', () => {
		const kernels = create(shapeOf({ rawCapacity: 100 }));
		const { buffer } = kernels.samples[0]!;
		fillWithNoise(kernels, SEED);
		kernels.transformWindow(kernels.guard, 1);
		kernels.slide(1, 10);
		expect(kernels.samples[0]!.buffer).toBe(buffer);
		expect(kernels.samples.map(({ length }) => length)).toEqual([400, 400]);
		expect(kernels.windows.map(({ length }) => length)).toEqual([256, 256]);
		expect(kernels.spectra.map(({ length }) => length)).toEqual([258, 258]);
		expect(kernels.raw.length).toBe(100);
		expect(kernels.guard).toBe(KERNEL.halfWidth);
	});
});

describe('both forms', () => {
	it('give the same windows to the last bit and the same lines within 1e-14 of the largest', () => {
		fc.assert(
			fc.property(
				fc.constantFrom(1, 2, 3, 4, 5, 6, 7, 8, 9, 11),
				fc.integer({ min: 6, max: 11 }),
				fc.double({ min: 0, max: 1, noNaN: true }),
				fc.double({ min: 0, max: 1, noNaN: true }),
				fc.constantFrom(KERNEL, SHORT_KERNEL, { ...KERNEL, halfWidth: 13 }, { ...KERNEL, halfWidth: 18 }),
				fc.integer({ min: 0, max: 1e6 }),
				(channelCount, exponent, share, fraction, kernel, seed) => {
					const points = 2 ** exponent;
					const lineCount = 1 + Math.floor(share * (points / 2));
					const capacity = Math.floor(points * (0.6 + share)) + 2 * kernel.halfWidth + 3;
					const shape = shapeOf({ channelCount, points, lineCount, capacity, kernel });
					const [script, wasm] = [createScriptKernels(shape), createWasmKernels(shape)];
					for (const kernels of [script, wasm]) {
						fillWithNoise(kernels, seed);
						const { start, step } = widestWindow(kernels, fraction);
						kernels.transformWindow(start, step);
					}
					expect(wasm.windows).toEqual(script.windows);
					wasm.spectra.forEach((spectrum, c) => {
						// The largest line of all, not of those kept: at least the root of the points' energy.
						const largest = Math.max(largestOf(spectrum), Math.sqrt(points));
						spectrum.forEach((value, i) =>
							expect(Math.abs(value - script.spectra[c]![i]!)).toBeLessThan(1e-14 * largest)
						);
					});
				}
			),
			{ seed: SEED, numRuns: 40 }
		);
	});
});

describe('the choice of kernels', () => {
	it('falls on WebAssembly where it runs, and on script when asked', () => {
		expect(wasmKernelsRun()).toBe(true);
		const sharesOneMemory = (kernels: SignalKernels) =>
			kernels.samples[0]!.buffer === kernels.windows[0]!.buffer;
		expect(sharesOneMemory(createSignalKernels(shapeOf({})))).toBe(true);
		expect(sharesOneMemory(createSignalKernels(shapeOf({}), 'script'))).toBe(false);
	});

	it('refuses window lengths that the vector form is not written for', () => {
		expect(() => createWasmKernels(shapeOf({ points: 32, lineCount: 3 }))).toThrow(RangeError);
		expect(() => createWasmKernels(shapeOf({ points: 100, lineCount: 3 }))).toThrow(RangeError);
	});
});
