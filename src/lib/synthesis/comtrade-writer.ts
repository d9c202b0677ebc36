import type { CaptureFile } from '../recording/recording';
import { parseUnit } from '../recording/unit-text';
import {
	configurationLines,
	needsNanoseconds,
	type ChannelScale,
	type ComtradeWriteOptions,
	type TextHabits,
	type WaveformChannelToWrite,
	type WaveformToWrite,
	type WrittenDataFormat
} from './comtrade-writer-header';
import { writeLines } from './recorder-text';

/** Greatest raw magnitude per data format; ASCII stays below the mark 99999 for "missing". */
const FULL_SCALE: Record<Exclude<WrittenDataFormat, 'FLOAT32'>, number> = {
	ASCII: 99_998,
	BINARY: 32_767,
	BINARY32: 2_147_483_647
};

const LARGEST_STAMP = 0xffff_fffe;
const STAMP_MISSING = 0xffff_ffff;
const LARGEST_FLOAT32 = 3.4028234e38;

/**
 * Writes a waveform as COMTRADE: "stem.cfg" with "stem.dat" (and "stem.hdr", "stem.inf"), or "stem.cff" alone.
 * Samples in volts and amperes are written in each channel's `unitAsWritten`, quantised to the steps of the
 * data format over the channel's range (or over its own largest sample); NaN becomes the format's mark.
 */
export function writeComtrade(waveform: WaveformToWrite, options: ComtradeWriteOptions): CaptureFile[] {
	if (options.combined && options.revision !== '2013')
		throw new Error('Only the 2013 revision has a combined file.');
	const scales = waveform.channels.map((channel) => scaleOf(channel, options.dataFormat));
	const { stamps, timeMultiplier } = stampsOf(waveform, options);
	const lines = configurationLines(waveform, options, scales, timeMultiplier);
	const { stem, dataFormat, notes = {} } = options;
	if (options.combined) return [combinedFile(waveform, options, lines, scales, stamps)];
	const data =
		dataFormat === 'ASCII'
			? writeLines(asciiLines(waveform, options, scales, stamps), dataHabits(options.text))
			: binaryData(waveform, scales, stamps, dataFormat);
	const note = (extension: string, text: string | undefined): CaptureFile[] =>
		text === undefined
			? []
			: [{ name: `${stem}.${extension}`, bytes: writeLines(text.split('\n'), options.text) }];
	return [
		{ name: `${stem}.cfg`, bytes: writeLines(lines, options.text) },
		{ name: `${stem}.dat`, bytes: data },
		...note('hdr', notes.hdr),
		...note('inf', notes.inf)
	];
}

/** Numbers are the same in every 8-bit encoding, so data only know UTF-16 and the others as one. */
function dataHabits(habits: TextHabits | undefined): TextHabits | undefined {
	return habits?.encoding?.startsWith('utf-16') ? habits : { ...habits, encoding: 'utf-8' };
}

function combinedFile(
	waveform: WaveformToWrite,
	options: ComtradeWriteOptions,
	lines: readonly string[],
	scales: ChannelScale[],
	stamps: Float64Array
): CaptureFile {
	const { dataFormat, notes = {}, text } = options;
	const name = `${options.stem}.cff`;
	const head = [
		'--- file type: CFG ---',
		...lines,
		'--- file type: INF ---',
		...(notes.inf ?? '').split('\n'),
		'--- file type: HDR ---',
		...(notes.hdr ?? '').split('\n')
	];
	if (dataFormat === 'ASCII') {
		const data = asciiLines(waveform, options, scales, stamps);
		return { name, bytes: writeLines([...head, '--- file type: DAT ASCII ---', ...data], text) };
	}
	const data = binaryData(waveform, scales, stamps, dataFormat);
	const marker = `--- file type: DAT ${dataFormat}: ${data.length} ---`;
	return { name, bytes: joined(writeLines([...head, marker], { ...text, endMark: false }), data) };
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

function stampsOf(
	waveform: WaveformToWrite,
	{ revision, withoutStamps }: ComtradeWriteOptions
): { stamps: Float64Array; timeMultiplier: number } {
	if (withoutStamps) return { stamps: new Float64Array(waveform.sampleCount).fill(NaN), timeMultiplier: 1 };
	const unit_s = needsNanoseconds(waveform.start) ? 1e-9 : 1e-6;
	const times_s = sampleTimes_s(waveform);
	const last = (times_s[times_s.length - 1] ?? 0) / unit_s;
	let timeMultiplier = 1;
	// The first revision has no multiplier: its stamps simply go on.
	while (revision !== '1991' && last / timeMultiplier > LARGEST_STAMP) timeMultiplier *= 10;
	const stamps = times_s.map((time_s) => Math.round(time_s / unit_s / timeMultiplier));
	return { stamps, timeMultiplier };
}

function asciiLines(
	waveform: WaveformToWrite,
	{ missingMark = '' }: ComtradeWriteOptions,
	scales: ChannelScale[],
	stamps: Float64Array
): string[] {
	const names = waveform.statusChannelNames ?? [];
	const rows: string[] = [];
	for (let sample = 0; sample < waveform.sampleCount; sample++) {
		const stamp = stamps[sample]!;
		let row = `${sample + 1},${Number.isNaN(stamp) ? '' : stamp}`;
		for (const [index, channel] of waveform.channels.entries()) {
			const raw = rawValue(channel.samples[sample] as number, channel, scales[index] as ChannelScale);
			row += Number.isNaN(raw) ? `,${missingMark}` : `,${raw === 0 ? 0 : raw}`;
		}
		for (const index of names.keys()) row += `,${waveform.statusStates?.[index]?.[sample] ?? 0}`;
		rows.push(row);
	}
	return rows;
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
		const stamp = stamps[sample]!;
		view.setUint32(row + 4, Number.isNaN(stamp) ? STAMP_MISSING : stamp, true);
		for (const [index, channel] of waveform.channels.entries()) {
			const at = row + 8 + width * index;
			const value = channel.samples[sample] as number;
			if (format === 'FLOAT32') view.setFloat32(at, inWrittenUnit(value, channel), true);
			else writeInteger(view, at, rawValue(value, channel, scales[index] as ChannelScale), width);
		}
		const statusAt = row + 8 + width * waveform.channels.length;
		for (const [index, states] of (waveform.statusStates ?? []).entries()) {
			const at = statusAt + 2 * (index >> 4);
			if (states[sample] === 1) view.setUint16(at, view.getUint16(at, true) | (1 << (index & 15)), true);
		}
	}
	return bytes;
}

/** The lowest integer of each width marks a missing value. */
function writeInteger(view: DataView, at: number, raw: number, width: number): void {
	if (width === 2) view.setInt16(at, Number.isNaN(raw) ? -0x8000 : raw, true);
	else view.setInt32(at, Number.isNaN(raw) ? -0x8000_0000 : raw, true);
}
