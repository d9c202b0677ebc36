import type { CaptureFile } from '../recording/recording';
import { parseIsoLocal } from '../recording/calendar';

export type WavSamples = 'uint8' | 'int16' | 'int24' | 'int32' | 'float32' | 'float64';

export interface WavToWrite {
	samplingRate_Hz: number;
	/** [channels][samples] parts of full scale; integers clip at ±1. */
	channels: readonly Float64Array[];
}

export interface WavWriteOptions {
	/** File name without extension. */
	stem: string;
	samples: WavSamples;
	/** 64-bit sizes in a ds64 chunk. */
	form?: 'RIFF' | 'RF64' | 'BW64';
	/** WAVE_FORMAT_EXTENSIBLE with the format behind it. */
	extensible?: boolean;
	/** Size of the data as a recorder leaves it that does not know the end yet. */
	openSize?: 'zero' | 'all ones';
	/** Chunks of odd length before the data, which readers have to step over. */
	strangeChunks?: boolean;
	/** Texts of a LIST INFO chunk, by their four letters. */
	info?: Record<string, string>;
	/** Broadcast extension (EBU Tech 3285). */
	broadcast?: { description: string; originator: string; local: string };
}

const WIDTHS: Record<WavSamples, number> = { uint8: 1, int16: 2, int24: 3, int32: 4, float32: 4, float64: 8 };

/** Half a step of each width, in parts of full scale: what writing may change. */
export const WAV_HALF_STEP: Record<WavSamples, number> = {
	uint8: 2 ** -8,
	int16: 2 ** -16,
	int24: 2 ** -24,
	int32: 2 ** -32,
	float32: 2 ** -24,
	float64: 0
};

function chunk(id: string, content: Uint8Array, size = content.length): Uint8Array {
	const bytes = new Uint8Array(8 + content.length + (content.length % 2));
	bytes.set(ascii(id), 0);
	new DataView(bytes.buffer).setUint32(4, size, true);
	bytes.set(content, 8);
	return bytes;
}

function ascii(text: string, length = text.length): Uint8Array {
	const bytes = new Uint8Array(length);
	bytes.set(new TextEncoder().encode(text).subarray(0, length));
	return bytes;
}

function joined(parts: readonly Uint8Array[]): Uint8Array {
	const bytes = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
	let at = 0;
	for (const part of parts) {
		bytes.set(part, at);
		at += part.length;
	}
	return bytes;
}

function formatChunk({ channels, samplingRate_Hz }: WavToWrite, options: WavWriteOptions): Uint8Array {
	const width = WIDTHS[options.samples];
	const tag = options.samples.startsWith('float') ? 3 : 1;
	const bytes = new Uint8Array(options.extensible ? 40 : 16);
	const view = new DataView(bytes.buffer);
	view.setUint16(0, options.extensible ? 0xfffe : tag, true);
	view.setUint16(2, channels.length, true);
	view.setUint32(4, samplingRate_Hz, true);
	view.setUint32(8, samplingRate_Hz * width * channels.length, true);
	view.setUint16(12, width * channels.length, true);
	view.setUint16(14, 8 * width, true);
	if (options.extensible) {
		view.setUint16(16, 22, true);
		view.setUint16(18, 8 * width, true);
		view.setUint16(24, tag, true);
		bytes.set([0, 0, 0, 0, 0x10, 0, 0x80, 0, 0, 0xaa, 0, 0x38, 0x9b, 0x71], 26);
	}
	return chunk('fmt ', bytes);
}

function writeValue(view: DataView, at: number, value: number, samples: WavSamples): void {
	const whole = (bits: number) =>
		Math.min(2 ** (bits - 1) - 1, Math.max(-(2 ** (bits - 1)), Math.round(value * 2 ** (bits - 1))));
	switch (samples) {
		case 'uint8':
			view.setUint8(at, whole(8) + 128);
			return;
		case 'int16':
			view.setInt16(at, whole(16), true);
			return;
		case 'int24':
			view.setUint16(at, whole(24) & 0xffff, true);
			view.setInt8(at + 2, whole(24) >> 16);
			return;
		case 'int32':
			view.setInt32(at, whole(32), true);
			return;
		case 'float32':
			view.setFloat32(at, value, true);
			return;
		case 'float64':
			view.setFloat64(at, value, true);
	}
}

function sampleBytes({ channels }: WavToWrite, samples: WavSamples): Uint8Array {
	const width = WIDTHS[samples];
	const count = channels[0]?.length ?? 0;
	const bytes = new Uint8Array(count * width * channels.length);
	const view = new DataView(bytes.buffer);
	for (let sample = 0; sample < count; sample++)
		for (const [index, values] of channels.entries())
			writeValue(view, (sample * channels.length + index) * width, values[sample]!, samples);
	return bytes;
}

function broadcastChunk(
	{ description, originator, local }: NonNullable<WavWriteOptions['broadcast']>,
	samplingRate_Hz: number
): Uint8Array {
	const clock = parseIsoLocal(local);
	if (clock === null) throw new Error(`A start must be a local ISO date and time, not "${local}".`);
	const bytes = new Uint8Array(602);
	bytes.set(ascii(description, 256), 0);
	bytes.set(ascii(originator, 32), 256);
	bytes.set(ascii(local.slice(0, 10)), 320);
	bytes.set(ascii(local.slice(11, 19)), 330);
	const second = clock.hour * 3600 + clock.minute * 60 + clock.second + Number(`0.${clock.fraction || '0'}`);
	new DataView(bytes.buffer).setBigUint64(338, BigInt(Math.round(second * samplingRate_Hz)), true);
	return chunk('bext', bytes);
}

/** Writes samples as a WAV file: RIFF, RF64 (EBU Tech 3306) or BW64 (ITU-R BS.2088). */
export function writeWav(wave: WavToWrite, options: WavWriteOptions): CaptureFile {
	const { form = 'RIFF', openSize, info, broadcast } = options;
	const data = sampleBytes(wave, options.samples);
	const isLong = form !== 'RIFF';
	const dataSize = isLong || openSize === 'all ones' ? 0xffff_ffff : openSize === 'zero' ? 0 : data.length;
	const parts: Uint8Array[] = [];
	if (options.strangeChunks) parts.push(chunk('JUNK', Uint8Array.of(1, 2, 3)));
	if (broadcast) parts.push(broadcastChunk(broadcast, wave.samplingRate_Hz));
	parts.push(formatChunk(wave, options));
	if (options.strangeChunks) parts.push(chunk('odd ', Uint8Array.of(9)));
	if (info)
		parts.push(
			chunk(
				'LIST',
				joined([ascii('INFO'), ...Object.entries(info).map(([id, text]) => chunk(id, ascii(`${text}\0`)))])
			)
		);
	// Data of an open length reach to the end of the file: padding would be taken for a sample.
	parts.push(
		openSize ? chunk('data', data, dataSize).subarray(0, 8 + data.length) : chunk('data', data, dataSize)
	);
	const inside = joined(parts);
	const long = new Uint8Array(isLong && !openSize ? 28 : 0);
	if (long.length > 0) {
		const view = new DataView(long.buffer);
		view.setBigUint64(0, BigInt(4 + 36 + inside.length), true);
		view.setBigUint64(8, BigInt(data.length), true);
		view.setBigUint64(16, BigInt(wave.channels[0]?.length ?? 0), true);
	}
	const body = long.length > 0 ? joined([chunk('ds64', long), inside]) : inside;
	const head = new Uint8Array(12);
	head.set(ascii(form), 0);
	new DataView(head.buffer).setUint32(4, isLong || openSize ? 0xffff_ffff : 4 + body.length, true);
	head.set(ascii('WAVE'), 8);
	return { name: `${options.stem}.wav`, bytes: joined([head, body]) };
}
