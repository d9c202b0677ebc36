import { executeRealDft, planRealDft } from '../dft/real-dft';
import { interpolateEvenly, planInterpolator } from '../resample/interpolator';
import { planEqualiser } from '../resample/taper-equaliser';
import { checkRowBounds } from './row-bounds';
import type { KernelShape, RawFormat, RowLayout, SignalKernels, StretchFigures } from './signal-kernels';

const MISSING: Record<RawFormat, number> = { int16: -(2 ** 15), int32: -(2 ** 31), float32: NaN };

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
		const { format, rowBytes } = layout;
		for (let c = 0; c < channelCount; c++) {
			const into = samples[c]!;
			const factor = layout.factors[c]!;
			const addition = layout.additions[c]!;
			let place = layout.offsets[c]!;
			for (let row = 0; row < count; row++, place += rowBytes) {
				const value =
					format === 'int16'
						? view.getInt16(place, true)
						: format === 'int32'
							? view.getInt32(place, true)
							: view.getFloat32(place, true);
				const missing = value === MISSING[format] || !Number.isFinite(value);
				into[at + row] = missing ? NaN : factor * value + addition;
			}
		}
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
