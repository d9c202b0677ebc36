import { parseIsoLocal, type WallClock } from '../recording/calendar';
import type { Phase } from '../recording/phase';
import type { RateSegment, RecordingChannel, RecordingStart } from '../recording/recording';

/** What the writers need to know of a waveform; every Recording with a start is one. */
export interface WaveformToWrite {
	stationName: string;
	recorderName: string;
	nominalFrequency_Hz: number | null;
	start: RecordingStart;
	sampleCount: number;
	/** Empty together with `timeStamps_s` for unevenly spaced samples. */
	segments: RateSegment[];
	timeStamps_s?: Float64Array | null;
	channels: WaveformChannelToWrite[];
	statusChannelNames?: string[];
	/** One for each status channel, [sampleCount] 0 or 1; all 0 where absent. */
	statusStates?: Uint8Array[];
	/** One for each status channel: its state in normal service; 0 where absent. */
	normalStates?: (0 | 1)[];
}

export type WaveformChannelToWrite = Pick<RecordingChannel, 'name' | 'unitAsWritten' | 'samples'> &
	Partial<Pick<RecordingChannel, 'phaseHint' | 'valuesAre' | 'ratio' | 'range' | 'skew_s'>>;

export type WrittenDataFormat = 'ASCII' | 'BINARY' | 'BINARY32' | 'FLOAT32';

export interface ComtradeWriteOptions {
	revision: '1991' | '1999' | '2013';
	dataFormat: WrittenDataFormat;
	/** File name without extension. */
	stem: string;
	/** One combined file instead of two; 2013 only. */
	combined?: boolean;
	/** How the recorder's clock stood, as the 2013 revision writes it; locked, at the place of the times, where absent. */
	clock?: { localOffset_min: number | null; quality: string; leapSecond: 0 | 1 | 2 | 3 };
	/** What stands in ASCII data where a value is missing; an empty field where absent. */
	missingMark?: '' | '99999' | '999999';
	/** Binary and ASCII data without a time stamp in any row. */
	withoutStamps?: boolean;
	/** Text for people: HDR and INF, as sections or files of their own. */
	notes?: { hdr?: string; inf?: string };
	/** What recorders do to their text. */
	text?: TextHabits;
}

export interface TextHabits {
	lineEnd?: '\r\n' | '\n' | '\r' | 'mixed';
	encoding?: TextEncoding;
	/** Blanks around the fields and at the ends of the lines. */
	padded?: boolean;
	/** A 0x1A byte behind the last line. */
	endMark?: boolean;
}

export type TextEncoding =
	| 'utf-8'
	| 'utf-8 with mark'
	| 'utf-16le'
	| 'utf-16be'
	| 'windows-1251'
	| 'ibm866'
	| 'windows-1252'
	| 'gb18030';

/** How raw values of one channel are made: value in the written unit = a × raw; limits as written. */
export interface ChannelScale {
	a: number;
	minimum: number;
	maximum: number;
}

const PHASE_FIELDS: Record<Phase, string> = {
	L1: 'A',
	L2: 'B',
	L3: 'C',
	N: 'N',
	L1L2: 'AB',
	L2L3: 'BC',
	L3L1: 'CA'
};

/** Commas separate fields and cannot be written inside one. */
function field(text: string): string {
	return text.replace(/[,\r\n]+/g, ' ').trim();
}

function clockOf(start: RecordingStart): WallClock {
	const clock = parseIsoLocal(start.local);
	if (clock === null) throw new Error(`A start must be a local ISO date and time, not "${start.local}".`);
	return clock;
}

/** Whether the start needs more than microseconds: the time stamps then count nanoseconds. */
export function needsNanoseconds(start: RecordingStart): boolean {
	return clockOf(start).fraction.length > 6;
}

function timeLine(start: RecordingStart, isMonthFirst: boolean): string {
	const clock = clockOf(start);
	const two = (value: number) => String(value).padStart(2, '0');
	const fraction = clock.fraction.padEnd(clock.fraction.length > 6 ? 9 : 6, '0');
	const [one, other] = isMonthFirst ? [clock.month, clock.day] : [clock.day, clock.month];
	return `${two(one)}/${two(other)}/${clock.year},${two(clock.hour)}:${two(clock.minute)}:${two(clock.second)}.${fraction}`;
}

/** −330 → "-5h30", 120 → "+2", 0 → "0"; "x" where the zone is not known. */
function timeCode(utcOffset_min: number | null): string {
	if (utcOffset_min === null) return 'x';
	if (utcOffset_min === 0) return '0';
	const size = Math.abs(utcOffset_min);
	const minutes = size % 60 === 0 ? '' : `h${size % 60}`;
	return `${utcOffset_min < 0 ? '-' : '+'}${Math.floor(size / 60)}${minutes}`;
}

function analogueLine(
	channel: WaveformChannelToWrite,
	index: number,
	scale: ChannelScale,
	is1991: boolean
): string {
	const side = channel.valuesAre === 'secondary' ? 'S' : 'P';
	const ratio = channel.ratio ?? { primary: 1, secondary: 1 };
	const phase = channel.phaseHint ? PHASE_FIELDS[channel.phaseHint] : '';
	const skew_us = (channel.skew_s ?? 0) * 1e6;
	const fields = [
		index + 1,
		field(channel.name),
		phase,
		'',
		field(channel.unitAsWritten),
		scale.a,
		0,
		skew_us,
		scale.minimum,
		scale.maximum
	];
	// The first revision ends after the limits.
	if (!is1991) fields.push(ratio.primary, ratio.secondary, side);
	return fields.join(',');
}

function rateLines(waveform: WaveformToWrite): string[] {
	if (waveform.segments.length === 0) return ['0', `0,${waveform.sampleCount}`];
	const lines = waveform.segments.map(({ samplingRate_Hz, toSample }) => `${samplingRate_Hz},${toSample}`);
	return [String(lines.length), ...lines];
}

/** The lines of the configuration, in the order of IEEE C37.111-1999, clause 5 and -2013, clause 7. */
export function configurationLines(
	waveform: WaveformToWrite,
	options: ComtradeWriteOptions,
	scales: ChannelScale[],
	timeMultiplier: number
): string[] {
	const status = waveform.statusChannelNames ?? [];
	const is1991 = options.revision === '1991';
	const time = timeLine(waveform.start, is1991);
	const normalState = (index: number) => waveform.normalStates?.[index] ?? 0;
	const lines = [
		[field(waveform.stationName), field(waveform.recorderName), ...(is1991 ? [] : [options.revision])].join(
			','
		),
		`${waveform.channels.length + status.length},${waveform.channels.length}A,${status.length}D`,
		...waveform.channels.map((channel, index) =>
			analogueLine(channel, index, scales[index] as ChannelScale, is1991)
		),
		...status.map((name, index) => `${index + 1},${field(name)},${is1991 ? '' : ',,'}${normalState(index)}`),
		String(waveform.nominalFrequency_Hz ?? 0),
		...rateLines(waveform),
		time,
		time,
		options.dataFormat,
		...(is1991 ? [] : [String(timeMultiplier)])
	];
	if (options.revision === '2013') {
		const code = timeCode(waveform.start.utcOffset_min);
		const { clock } = options;
		const place = clock === undefined ? code : timeCode(clock.localOffset_min);
		lines.push(`${code},${place}`, `${clock?.quality ?? '0'},${clock?.leapSecond ?? 0}`);
	}
	return lines;
}
