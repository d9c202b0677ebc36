import { planInterpolator } from '../resample/interpolator';
import { planEqualiser } from '../resample/taper-equaliser';
import { KERNELS_WASM_BASE64 } from './kernels-wasm';
import { type ChannelRegion, MemoryLayout } from './memory-layout';
import { checkRowBounds } from './row-bounds';
import type { KernelShape, RawFormat, RowLayout, SignalKernels, StretchFigures } from './signal-kernels';
import { transformTables } from './transform-tables';

/** Shortest window that the transform in assembly/transform.ts is written for. */
const SHORTEST = 64;
/** Bytes of one channel's entry in the decoding table; see assembly/samples.ts. */
const DECODING_BYTES = 24;
const STRETCH_BYTES = 24;

type Decoder = (table: number, channelCount: number, rowBytes: number, count: number) => void;

/** Exports of assembly/kernels.ts; addresses are bytes. */
interface KernelModule {
	memory: WebAssembly.Memory;
	decodeInt16: Decoder;
	decodeInt32: Decoder;
	decodeFloat32: Decoder;
	decodeUint8: Decoder;
	decodeWholeInt16: Decoder;
	decodeInt24: Decoder;
	decodeWholeInt32: Decoder;
	decodeFloat64: Decoder;
	slide(samples: number, stride: number, channelCount: number, offset: number, bytes: number): void;
	stretch(from: number, to: number, result: number): void;
	interpolate(
		rows: number,
		weights: number,
		halfWidth: number,
		samples: number,
		sampleStride: number,
		windows: number,
		windowStride: number,
		channelCount: number,
		start: number,
		step: number,
		count: number
	): void;
	transform(
		windows: number,
		windowStride: number,
		spectra: number,
		spectrumStride: number,
		channelCount: number,
		points: number,
		lineCount: number,
		values: number,
		twiddles: number,
		places: number,
		turns: number,
		gains: number
	): void;
}

let compiled: WebAssembly.Module | null = null;

function moduleBytes(): Uint8Array<ArrayBuffer> {
	return Uint8Array.from(atob(KERNELS_WASM_BASE64), (letter) => letter.charCodeAt(0));
}

/** Whether WebAssembly is there and knows the 128-bit vectors that the module is made of. */
export function wasmKernelsRun(): boolean {
	return compiled !== null || (typeof WebAssembly === 'object' && WebAssembly.validate(moduleBytes()));
}

/** Every set of kernels has a memory of its own; the code is compiled once. */
function instantiate(): KernelModule {
	compiled ??= new WebAssembly.Module(moduleBytes());
	return new WebAssembly.Instance(compiled).exports as unknown as KernelModule;
}

/**
 * The kernels in WebAssembly with 128-bit vectors, from the sources in assembly/. Memory is sized once, for the shape.
 * error    windows equal those of the script kernels to the last bit; spectra agree to 1e-14 of the largest line
 * throws   RangeError when a window is no power of two of at least 64 points
 */
export function createWasmKernels(shape: KernelShape): SignalKernels {
	const { channelCount, capacity, points, lineCount } = shape;
	if (points < SHORTEST || !Number.isInteger(Math.log2(points))) {
		throw new RangeError(`A window must have a power of two of at least ${SHORTEST} points, not ${points}`);
	}
	const module = instantiate();
	const interpolator = planInterpolator(shape.kernel);
	const tables = transformTables(points, lineCount);

	const place = new MemoryLayout();
	const samplesAt = place.reserveChannels(channelCount, capacity);
	const windowsAt = place.reserveChannels(channelCount, points);
	const spectraAt = place.reserveChannels(channelCount, 2 * lineCount);
	const rowsAt = place.reserve(interpolator.rows.byteLength);
	const weightsAt = place.reserve(8 * interpolator.taps);
	const valuesAt = place.reserve(16 * points);
	const twiddlesAt = place.reserve(tables.twiddles.byteLength);
	const placesAt = place.reserve(tables.places.byteLength);
	const turnsAt = place.reserve(tables.turns.byteLength);
	const gainsAt = place.reserve(8 * lineCount);
	const decodingAt = place.reserve(DECODING_BYTES * channelCount);
	const stretchAt = place.reserve(STRETCH_BYTES);
	const rawAt = place.reserve(shape.rawCapacity);

	const { memory } = module;
	memory.grow(place.pages - memory.buffer.byteLength / 65536);
	const { buffer } = memory;
	new Float64Array(buffer, rowsAt).set(interpolator.rows);
	new Float64Array(buffer, twiddlesAt).set(tables.twiddles);
	new Uint32Array(buffer, placesAt).set(tables.places);
	new Float64Array(buffer, turnsAt).set(tables.turns);

	const equaliseFor = planEqualiser(shape.kernel, points, new Float64Array(buffer, gainsAt, lineCount));

	const buffers = ({ at, stride }: ChannelRegion, length: number) =>
		Array.from({ length: channelCount }, (_, c) => new Float64Array(buffer, at + c * stride, length));
	const raw = new Uint8Array(buffer, rawAt, shape.rawCapacity);
	const decoding = new DataView(buffer, decodingAt, DECODING_BYTES * channelCount);
	const stretched = new Float64Array(buffer, stretchAt, 3);
	const decoders: Record<RawFormat, Decoder> = {
		uint8: module.decodeUint8,
		int16: module.decodeInt16,
		int24: module.decodeInt24,
		int32: module.decodeInt32,
		float32: module.decodeFloat32,
		float64: module.decodeFloat64
	};
	const wholeDecoders: Record<RawFormat, Decoder> = {
		...decoders,
		int16: module.decodeWholeInt16,
		int32: module.decodeWholeInt32
	};

	function decodeRows(layout: RowLayout, count: number, at: number): void {
		checkRowBounds(shape, layout, count, at);
		const { format, rowBytes, offsets, factors, additions } = layout;
		for (let c = 0; c < channelCount; c++) {
			const entry = DECODING_BYTES * c;
			decoding.setUint32(entry, rawAt + offsets[c]!, true);
			decoding.setUint32(entry + 4, samplesAt.at + c * samplesAt.stride + 8 * at, true);
			decoding.setFloat64(entry + 8, factors[c]!, true);
			decoding.setFloat64(entry + 16, additions[c]!, true);
		}
		const decode = (layout.lowestIsValue ? wholeDecoders : decoders)[format];
		decode(decodingAt, channelCount, rowBytes, count);
	}

	function slide(from: number, count: number): void {
		module.slide(samplesAt.at, samplesAt.stride, channelCount, 8 * from, 8 * count);
	}

	function transformWindow(start: number, step: number): void {
		equaliseFor(step);
		module.interpolate(
			rowsAt,
			weightsAt,
			interpolator.guard,
			samplesAt.at,
			samplesAt.stride,
			windowsAt.at,
			windowsAt.stride,
			channelCount,
			start,
			step,
			points
		);
		module.transform(
			windowsAt.at,
			windowsAt.stride,
			spectraAt.at,
			spectraAt.stride,
			channelCount,
			points,
			lineCount,
			valuesAt,
			twiddlesAt,
			placesAt,
			turnsAt,
			gainsAt
		);
	}

	function stretch(channel: number, from: number, to: number): StretchFigures {
		const first = samplesAt.at + channel * samplesAt.stride;
		module.stretch(first + 8 * from, first + 8 * to, stretchAt);
		const squares = stretched[0]!;
		return Number.isNaN(squares)
			? { squares, least: NaN, greatest: NaN }
			: { squares, least: stretched[1]!, greatest: stretched[2]! };
	}

	return {
		shape,
		guard: interpolator.guard,
		raw,
		samples: buffers(samplesAt, capacity),
		windows: buffers(windowsAt, points),
		spectra: buffers(spectraAt, 2 * lineCount),
		decodeRows,
		slide,
		transformWindow,
		stretch
	};
}
