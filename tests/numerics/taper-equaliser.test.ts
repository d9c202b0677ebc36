/** Against the Fourier integral of the kernel by quadrature, and against tones known in closed form. */
import { describe, expect, it } from 'vitest';
import { createScriptKernels } from '$lib/numerics/kernels/script-kernels';
import type { KernelShape } from '$lib/numerics/kernels/signal-kernels';
import { createWasmKernels } from '$lib/numerics/kernels/wasm-kernels';
import {
	designTaperKernel,
	kaiserKernelFunction,
	taperResponse,
	type KaiserKernel
} from '$lib/numerics/resample/kaiser-kernel';
import { planEqualiser } from '$lib/numerics/resample/taper-equaliser';

/** Passband and stopband of orders to 50 in 10-cycle windows of 2048 points: without, with three and with five copies. */
const BANDS = [
	{ rate: 25600, passband: 0.1036, stopband: 0.67, error: 2e-9 },
	{ rate: 12800, passband: 0.2072, stopband: 0.5621, error: 2e-9 },
	{ rate: 9600, passband: 0.2763, stopband: 0.7237, error: 5e-9 }
];

function designed(passband: number, stopband: number): KaiserKernel {
	const kernel = designTaperKernel(passband, stopband, 120);
	if (!kernel) throw new Error('no kernel');
	return kernel;
}

/** ∫ kernel(t)·cos(2πft) dt by Simpson's rule. */
function integral(kernel: KaiserKernel, f: number): number {
	const valueAt = kaiserKernelFunction(kernel);
	// Every copy of the taper begins and ends in a step.
	const { spacing, weights } = kernel.lift ?? { spacing: 0, weights: [1] };
	const copies = weights.length - 1;
	const steps = Array.from({ length: 2 * copies + 1 }, (_, i) => (i - copies) * spacing)
		.flatMap((shift) => [-1, 1].map((side) => shift + side * (kernel.halfWidth - copies * spacing)))
		.sort((a, b) => a - b);
	return steps.slice(1).reduce((sum, to, i) => sum + simpson(valueAt, f, steps[i]! + 1e-12, to - 1e-12), 0);
}

function simpson(valueAt: (t: number) => number, f: number, from: number, to: number): number {
	const parts = 4000;
	let sum = 0;
	for (let i = 0; i <= parts; i++) {
		const t = from + ((to - from) * i) / parts;
		const share = i === 0 || i === parts ? 1 : i % 2 === 1 ? 4 : 2;
		sum += share * valueAt(t) * Math.cos(2 * Math.PI * f * t);
	}
	return (sum * (to - from)) / parts / 3;
}

describe.each(BANDS)('the taper for $rate S/s', ({ rate, passband, stopband, error }) => {
	const kernel = designed(passband, stopband);

	it('has the response that the closed form says', () => {
		const whole = integral(kernel, 0);
		for (const f of [0, 0.01, passband / 2, passband, stopband, stopband + 0.05, 0.9, 1.7]) {
			expect(Math.abs(taperResponse(kernel, f) - integral(kernel, f)) / whole).toBeLessThan(1e-11);
		}
	});

	it('keeps what is beyond the stopband 120 dB below the passband', () => {
		const edge = taperResponse(kernel, passband);
		for (let f = stopband; f < 5; f += 0.003) {
			expect(Math.abs(taperResponse(kernel, f))).toBeLessThanOrEqual(1e-6 * edge);
		}
		const inside = Array.from({ length: 101 }, (_, i) => taperResponse(kernel, (passband * i) / 100));
		expect(Math.max(...inside) / Math.min(...inside)).toBeLessThan(1.81);
	});

	it.each([
		['script', createScriptKernels],
		['WebAssembly', createWasmKernels]
	])('with equalised lines reads fifty orders as they are, in %s', (_form, create) => {
		const points = 2048;
		const lineCount = 511;
		// A fundamental of 49.3 Hz.
		const length = (10 * rate) / 49.3;
		const shape: KernelShape = {
			channelCount: 3,
			capacity: Math.ceil(length) + 40,
			points,
			lineCount,
			kernel,
			rawCapacity: 0
		};
		const kernels = create(shape);
		const start = kernels.guard + 0.37;
		const amplitude = (order: number) => (order === 1 ? 1 : 0.05);
		for (let i = 0; i < shape.capacity; i++) {
			let value = 0.02;
			for (let h = 1; h <= 50; h++) {
				value += amplitude(h) * Math.cos((2 * Math.PI * 10 * h * (i - start)) / length + h * h);
			}
			kernels.samples[2]![i] = value;
		}
		// Twice: the factors follow the step.
		kernels.transformWindow(start, (0.98 * length) / points);
		kernels.transformWindow(start, length / points);
		const spectrum = kernels.spectra[2]!;
		for (let k = 0; k < 505; k++) {
			const order = k / 10;
			const known = k > 0 && Number.isInteger(order) ? amplitude(order) / 2 : k === 0 ? 0.02 : 0;
			const phase = k > 0 ? order * order : 0;
			const re = spectrum[2 * k]! / points - known * Math.cos(phase);
			const im = spectrum[2 * k + 1]! / points - known * Math.sin(phase);
			expect(Math.hypot(re, im)).toBeLessThan(error);
		}
	});

	it('is equalised alike in both forms', () => {
		const shape = { channelCount: 2, capacity: 6000, points: 2048, lineCount: 500, kernel, rawCapacity: 0 };
		const [script, wasm] = [createScriptKernels(shape), createWasmKernels(shape)];
		for (const kernels of [script, wasm]) {
			for (let i = 0; i < 6000; i++) kernels.samples[1]![i] = Math.cos(i / 7) + Math.cos(i * i);
			kernels.transformWindow(kernels.guard, rate / 10000);
		}
		const largest = wasm.spectra[1]!.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
		wasm.spectra[1]!.forEach((value, i) =>
			expect(Math.abs(value - script.spectra[1]![i]!)).toBeLessThanOrEqual(1e-12 * largest)
		);
	});
});

describe('equalising', () => {
	it('is left out for kernels that are flat by themselves', () => {
		const gains = new Float64Array(5);
		planEqualiser({ cutoff: 0.4, halfWidth: 12, beta: 12 }, 64, gains)(1.3);
		expect([...gains]).toEqual([1, 1, 1, 1, 1]);
	});

	it('gives nothing for lines in the stopband', () => {
		const kernel = designed(0.2, 0.5);
		const gains = new Float64Array(33);
		planEqualiser(kernel, 64, gains)(0.5);
		// Line k lies at k/32 cycles per sample.
		expect(gains.slice(0, 16).every((gain) => gain > 0)).toBe(true);
		expect(gains.slice(16).every(Number.isNaN)).toBe(true);
	});

	it('is refused where the droop would be too deep', () => {
		expect(designTaperKernel(0.4, 0.46, 120)).toBeNull();
		expect(designTaperKernel(0.4144, 0.5856, 120)).toBeNull();
		expect(designTaperKernel(0.25, 0.6, 120)).not.toBeNull();
	});
});
