import { executeRealDft, planRealDft } from '../dft/real-dft';
import { interpolateEvenly, planInterpolator } from '../resample/interpolator';
import { planEqualiser } from '../resample/taper-equaliser';
import { decodeChannel } from './raw-value';
import { checkRowBounds } from './row-bounds';
import type { KernelShape, RowLayout, SignalKernels, StretchFigures } from './signal-kernels';

/** The kernels in plain script over the general-purpose transform: reference of the tests, and fallback. */
export function createScriptKernels(shape: KernelShape): SignalKernels {
	const { channelCount, capacity, points, lineCount } = shape;
	const interpolator = planInterpolator(shape.kernel);
	const transform = planRealDft(points);
	const gains = new Float64Array(lineCount);
	const equaliseFor = planEqualiser(shape.kernel, points, gains);
	const raw = new Uint8Array(shape.rawCapacity);
	const view = new DataView(raw.buffer);
	const buffers = (length: number) => Array.from({ length: channelCount }, () => new Float64Array(length));
	const samples = buffers(capacity);
	const windows = buffers(points);
	const spectra = buffers(2 * lineCount);

	function decodeRows(layout: RowLayout, count: number, at: number): void {
		checkRowBounds(shape, layout, count, at);
		for (let c = 0; c < channelCount; c++) decodeChannel(view, layout, c, count, samples[c]!, at);
	}

	function transformWindow(start: number, step: number): void {
		equaliseFor(step);
		interpolateEvenly(interpolator, samples, start, step, points, windows);
		for (let c = 0; c < channelCount; c++) {
			executeRealDft(transform, windows[c]!);
			const out = spectra[c]!;
			for (let i = 0; i < 2 * lineCount; i++) out[i] = transform.spectrum[i]! * gains[i >> 1]!;
		}
	}

	function stretch(channel: number, from: number, to: number): StretchFigures {
		const values = samples[channel]!;
		let squares = 0;
		let least = Infinity;
		let greatest = -Infinity;
		for (let i = from; i < to; i++) {
			const value = values[i]!;
			squares += value * value;
			if (value < least) least = value;
			if (value > greatest) greatest = value;
		}
		return Number.isNaN(squares) ? { squares, least: NaN, greatest: NaN } : { squares, least, greatest };
	}

	return {
		shape,
		guard: interpolator.guard,
		raw,
		samples,
		windows,
		spectra,
		decodeRows,
		slide: (from, count) => samples.forEach((values) => values.copyWithin(0, from, from + count)),
		transformWindow,
		stretch
	};
}
