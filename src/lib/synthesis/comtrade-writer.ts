import type { CaptureFile } from '../recording/recording';
import { parseUnit } from '../recording/unit-text';
import {
	configurationLines,
	needsNanoseconds,
	type ChannelScale,
	type ComtradeWriteOptions,
	type WaveformChannelToWrite,
	type WaveformToWrite,
	type WrittenDataFormat
} from './comtrade-writer-header';

/** Greatest raw magnitude per data format; ASCII stays below the mark 99999 for "missing". */
const FULL_SCALE: Record<Exclude<WrittenDataFormat, 'FLOAT32'>, number> = {
	ASCII: 99_998,
	BINARY: 32_767,
	BINARY32: 2_147_483_647
};

const LARGEST_STAMP = 0xffff_fffe;
const LARGEST_FLOAT32 = 3.4028234e38;

/**
 * Writes a waveform as COMTRADE: "stem.cfg" with "stem.dat", or "stem.cff" alone.
 * Samples in volts and amperes are written in each channel's `unitAsWritten`, quantised to the steps of the
 * data format over the channel's range (or over its own largest sample); NaN becomes the format's mark.
 */
export function writeComtrade(waveform: WaveformToWrite, options: ComtradeWriteOptions): CaptureFile[] {
	if (options.combined && options.revision !== '2013')
		throw new Error('Only the 2013 revision has a combined file.');
	const scales = waveform.channels.map((channel) => scaleOf(channel, options.dataFormat));
	const { stamps, timeMultiplier } = stampsOf(waveform);
	const data =
		options.dataFormat === 'ASCII'
			? asciiData(waveform, scales, stamps)
			: binaryData(waveform, scales, stamps, options.dataFormat);
	const lines = configurationLines(waveform, options, scales, timeMultiplier);
	if (!options.combined) {
		return [
			{ name: `${options.stem}.cfg`, bytes: encode(`${lines.join('\r\n')}\r\n`) },
			{ name: `${options.stem}.dat`, bytes: data }
		];
	}
	const size = options.dataFormat === 'ASCII' ? '' : `: ${data.length}`;
	const head = [
		'--- file type: CFG ---',
		...lines,
		'--- file type: INF ---',
		'',
		'--- file type: HDR ---',
		'',
		`--- file type: DAT ${options.dataFormat}${size} ---`,
		''
	];
	return [{ name: `${options.stem}.cff`, bytes: joined(encode(head.join('\r\n')), data) }];
}

function encode(text: string): Uint8Array {
	return new TextEncoder().encode(text);
}

function joined(first: Uint8Array, second: Uint8Array): Uint8Array {
	const bytes = new Uint8Array(first.length + second.length);
	bytes.set(first, 0);
	bytes.set(second, first.length);
	return bytes;
}

/** A value in volts or amperes, in the unit that the file names. */
function inWrittenUnit(value: number, channel: WaveformChannelToWrite): number {
	const unit = parseUnit(channel.unitAsWritten);
	return (value * unit.over) / unit.times;
}

function scaleOf(channel: WaveformChannelToWrite, format: WrittenDataFormat): ChannelScale {
	if (format === 'FLOAT32') return { a: 1, minimum: -LARGEST_FLOAT32, maximum: LARGEST_FLOAT32 };
	let largest = 0;
	if (channel.range) largest = Math.max(Math.abs(channel.range.min), Math.abs(channel.range.max));
	else for (const sample of channel.samples) if (Math.abs(sample) > largest) largest = Math.abs(sample);
	const limit = FULL_SCALE[format];
	const a = inWrittenUnit(largest, channel) / limit;
	return { a: a > 0 ? a : 1, minimum: -limit, maximum: limit };
}

/** Raw value; NaN for a missing sample. What lies outside the range is clipped, as a recorder does. */
function rawValue(sample: number, channel: WaveformChannelToWrite, scale: ChannelScale): number {
	const raw = Math.round(inWrittenUnit(sample, channel) / scale.a);
	return Math.min(scale.maximum, Math.max(scale.minimum, raw));
}

/** Seconds of every sample after sample 0, gaps between segments included. */
function sampleTimes_s(waveform: WaveformToWrite): Float64Array {
	if (waveform.segments.length === 0) {
		if (!waveform.timeStamps_s) throw new Error('A waveform needs a sampling rate or time stamps.');
		return waveform.timeStamps_s;
	}
	const times_s = new Float64Array(waveform.sampleCount);
	let segmentStart_s = 0;
	let stepBefore_s = 0;
	for (const { samplingRate_Hz, fromSample, toSample, gapBefore_s } of waveform.segments) {
		const step_s = 1 / samplingRate_Hz;
		if (fromSample > 0) segmentStart_s += step_s - stepBefore_s + (gapBefore_s ?? 0);
		for (let sample = fromSample; sample < toSample; sample++)
			times_s[sample] = segmentStart_s + (sample - fromSample) * step_s;
		segmentStart_s += (toSample - fromSample) * step_s;
		stepBefore_s = step_s;
	}
	return times_s;
}

function stampsOf(waveform: WaveformToWrite): { stamps: Float64Array; timeMultiplier: number } {
	const unit_s = needsNanoseconds(waveform.start) ? 1e-9 : 1e-6;
	const times_s = sampleTimes_s(waveform);
	const last = (times_s[times_s.length - 1] ?? 0) / unit_s;
	let timeMultiplier = 1;
	while (last / timeMultiplier > LARGEST_STAMP) timeMultiplier *= 10;
	const stamps = times_s.map((time_s) => Math.round(time_s / unit_s / timeMultiplier));
	return { stamps, timeMultiplier };
}

function asciiData(waveform: WaveformToWrite, scales: ChannelScale[], stamps: Float64Array): Uint8Array {
	const statusFields = ',0'.repeat((waveform.statusChannelNames ?? []).length);
	const rows: string[] = [];
	for (let sample = 0; sample < waveform.sampleCount; sample++) {
		let row = `${sample + 1},${stamps[sample]}`;
		for (const [index, channel] of waveform.channels.entries()) {
			const raw = rawValue(channel.samples[sample] as number, channel, scales[index] as ChannelScale);
			row += Number.isNaN(raw) ? ',' : `,${raw === 0 ? 0 : raw}`;
		}
		rows.push(row + statusFields);
	}
	return encode(`${rows.join('\r\n')}\r\n`);
}

function binaryData(
	waveform: WaveformToWrite,
	scales: ChannelScale[],
	stamps: Float64Array,
	format: Exclude<WrittenDataFormat, 'ASCII'>
): Uint8Array {
	const width = format === 'BINARY' ? 2 : 4;
	const statusBytes = 2 * Math.ceil((waveform.statusChannelNames ?? []).length / 16);
	const rowBytes = 8 + width * waveform.channels.length + statusBytes;
	const bytes = new Uint8Array(rowBytes * waveform.sampleCount);
	const view = new DataView(bytes.buffer);
	for (let sample = 0; sample < waveform.sampleCount; sample++) {
		const row = sample * rowBytes;
		view.setUint32(row, sample + 1, true);
		view.setUint32(row + 4, stamps[sample] as number, true);
		for (const [index, channel] of waveform.channels.entries()) {
			const at = row + 8 + width * index;
			const value = channel.samples[sample] as number;
			if (format === 'FLOAT32') view.setFloat32(at, inWrittenUnit(value, channel), true);
			else writeInteger(view, at, rawValue(value, channel, scales[index] as ChannelScale), width);
		}
	}
	return bytes;
}

/** The lowest integer of each width marks a missing value. */
function writeInteger(view: DataView, at: number, raw: number, width: number): void {
	if (width === 2) view.setInt16(at, Number.isNaN(raw) ? -0x8000 : raw, true);
	else view.setInt32(at, Number.isNaN(raw) ? -0x8000_0000 : raw, true);
}
