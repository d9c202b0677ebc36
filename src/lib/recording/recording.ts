import type { Phase } from './phase';

/** What a reader says about a file that it could read, but not without remark. */
export interface ReadRemark {
	severity: 'note' | 'warning';
	/** Stable code, e.g. `sample-count-mismatch`; the sentence is for people. */
	code: string;
	/** A full sentence: file, line or byte, what was found and what was expected. */
	sentence: string;
}

/** Why a file cannot be read: file, place and expectation, so that the person can mend or replace it. */
export interface ReadProblem {
	code: string;
	/** File name as uploaded. */
	file: string;
	/** "line 3", "byte 18 432", or null when the whole file is meant. */
	place: string | null;
	/** A full sentence that names the file, the place and what was expected there. */
	sentence: string;
	/** A table of text that a person can still tell the meaning of. */
	isTable?: true;
}

export type ChannelQuantity = 'voltage' | 'current' | 'other';

/** One analogue channel, in SI base units (V, A), before any transformer ratio is applied. */
export interface RecordingChannel {
	/** Position among the analogue channels, from 0. */
	index: number;
	/** Name as written in the file, trimmed. */
	name: string;
	/** Phase as written in the file ("A", "L1-N", …) or what its name suggests; null when neither tells. */
	phaseHint: Phase | null;
	/** Unit as written in the file, e.g. "kV"; the samples are already in `baseUnit`. */
	unitAsWritten: string;
	baseUnit: 'V' | 'A' | string;
	quantity: ChannelQuantity;
	/** [sampleCount] values in baseUnit, side as `valuesAre` says. NaN marks a missing sample. */
	samples: Float64Array;
	/** Whether the samples are primary or secondary values of the instrument transformer. */
	valuesAre: 'primary' | 'secondary' | 'unknown';
	/** Transformer ratio as the file states it (both on one scale); null when the file states none. */
	ratio: { primary: number; secondary: number } | null;
	/** Value range that the recorder can express, in baseUnit, when the file tells; for the clipping check. */
	range: { min: number; max: number } | null;
	/** Delay of this channel's sample after the sample time, seconds, where the file states one. */
	skew_s?: number;
	/** Samples that are missing; absent where the reader has not counted them. */
	missingCount?: number;
}

/** What a status (on/off) channel did during the recording. */
export interface StatusActivity {
	name: string;
	/** State in normal service, where the file states it. */
	normalState: 0 | 1 | null;
	/** State at the first sample; null where it cannot be read. */
	startsAs: 0 | 1 | null;
	changeCount: number;
	/** Sample, from 0, at which the state is another one for the first time; null without a change. */
	firstChangeAtSample: number | null;
}

/** Free text that came with a recording, for people: nothing in it is computed with. */
export interface RecordingNote {
	/** Where it stands: a file, or a section of one. */
	title: string;
	text: string;
}

/** A stretch of samples taken at one rate; `toSample` is exclusive. */
export interface RateSegment {
	samplingRate_Hz: number;
	fromSample: number;
	toSample: number;
	/** Time without samples between the end of the segment before and this one; absent where they join. */
	gapBefore_s?: number;
}

/** The moment of sample 0. `utcOffset_min` is null when the file does not tell its zone: the site's zone is used then. */
export interface RecordingStart {
	/** Local date and time as the file writes it, ISO form with up to nanoseconds, no zone suffix. */
	local: string;
	utcOffset_min: number | null;
}

/** Open formats that are read. */
export type CaptureFormat = 'COMTRADE' | 'PQDIF' | 'delimited text' | 'WAV';

/** The one shape that leaves a reader of waveforms. */
export interface Recording {
	kind: 'waveform';
	format: CaptureFormat;
	/** e.g. "1999 BINARY", "2013 ASCII", "comma separated". */
	variant: string;
	stationName: string;
	recorderName: string;
	/** As stated by the file; may be absent or wrong. */
	nominalFrequency_Hz: number | null;
	start: RecordingStart | null;
	sampleCount: number;
	/** Cover [0, sampleCount) without gap. Empty when only `timeStamps_s` tells the time. */
	segments: RateSegment[];
	/** [sampleCount] seconds from sample 0, only for captures without a stated rate; null otherwise. */
	timeStamps_s: Float64Array | null;
	channels: RecordingChannel[];
	statusChannelNames: string[];
	/** One for each status channel; absent where the format has none. */
	statusActivity?: StatusActivity[];
	notes?: RecordingNote[];
	remarks: ReadRemark[];
}

/** One column of a trend log: an aggregated value per interval. */
export interface TrendSeries {
	/** Column heading as written. */
	name: string;
	quantity: 'voltage' | 'current';
	phaseHint: Phase | null;
	/** What is tabulated: true rms, one order, the THD, or the fundamental frequency. */
	measure: { kind: 'rms' } | { kind: 'order'; order: number } | { kind: 'thd' } | { kind: 'frequency' };
	/** Absolute in V/A/Hz, or percent of the fundamental. */
	unit: 'V' | 'A' | 'Hz' | 'percent-of-fundamental';
	/** [intervalCount]; NaN marks no data. */
	values: Float64Array;
	/** Side of the instrument transformer that absolute values stand on, where the log states it. */
	valuesAre?: RecordingChannel['valuesAre'];
	/** Transformer ratio, where the log states one. */
	ratio?: RecordingChannel['ratio'];
}

/** The one shape that leaves a reader of trend logs: values per interval over hours or days. */
export interface Trend {
	kind: 'trend';
	format: CaptureFormat;
	variant: string;
	stationName: string;
	recorderName: string;
	nominalFrequency_Hz: number | null;
	start: RecordingStart;
	/** 3 or 600 (other spacings are read, and remarked on). */
	interval_s: number;
	/** [intervalCount] start of each interval, seconds from `start`; ascending; gaps show as larger steps. */
	intervalStarts_s: Float64Array;
	/** [intervalCount] 1 where the log marks the interval as flagged; null when the log has no such column. */
	flagged: Uint8Array | null;
	/** Aggregated (average or rms) values per interval. */
	series: TrendSeries[];
	/** Columns of minima and maxima inside each interval: kept for display, never for a percentile. */
	extremes?: (TrendSeries & { extreme: 'minimum' | 'maximum' })[];
	remarks: ReadRemark[];
}

export type CaptureContent = Recording | Trend;

/** One of the recordings or trends that the files of a capture hold; most hold one. */
export interface CapturePart<Content> {
	/** Names the part for good within its files; empty where there is but one. */
	key: string;
	/** What tells it from the others, for people: "Waveforms, 15.36 kHz", "10-minute values"; empty for a single one. */
	title: string;
	content: Content;
}

/** A file handed to a reader: its name and its bytes. Readers never touch the disk. */
export interface CaptureFile {
	name: string;
	bytes: Uint8Array;
}
