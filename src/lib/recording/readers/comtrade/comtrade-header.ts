import type { RecordingStart, ReadRemark, StatusActivity } from '../../recording';
import type { RowSamples } from '../../sample-source';

export type ComtradeRevision = '1991' | '1999' | '2013';
export type ComtradeDataFormat = 'ASCII' | 'BINARY' | 'BINARY32' | 'FLOAT32';

/** One analogue line of the configuration: value in `unit` = a × raw + b. */
export interface AnalogueLine {
	name: string;
	phaseField: string;
	unit: string;
	a: number;
	b: number;
	skew_us: number;
	/** Raw limits as written; null where absent or not a number. */
	minimum: number | null;
	maximum: number | null;
	ratio: { primary: number; secondary: number } | null;
	valuesAre: 'primary' | 'secondary' | 'unknown';
}

/** One status line of the configuration. */
export interface StatusLine {
	name: string;
	/** State in normal service; null where the line states neither 0 nor 1. */
	normalState: 0 | 1 | null;
}

/** Samples up to and with `lastSample` (counted from 1) were taken at this rate; 0 Hz means "see the time stamps". */
export interface RateLine {
	samplingRate_Hz: number;
	lastSample: number;
	line: number;
}

/** The configuration, checked. */
export interface ComtradeHeader {
	/** File that holds it, for sentences. */
	file: string;
	stationName: string;
	recorderName: string;
	revision: ComtradeRevision;
	analogues: AnalogueLine[];
	statuses: StatusLine[];
	nominalFrequency_Hz: number | null;
	/** Empty when the configuration gives no rate at all and only time stamps count. */
	rates: RateLine[];
	/** Number of samples announced, and the line that does; null when none does. */
	announced: { sampleCount: number; line: number } | null;
	/** Line that gives the number of rates: the place to name when neither a rate nor stamps are there. */
	rateCountLine: number;
	start: RecordingStart | null;
	dataFormat: ComtradeDataFormat;
	dataFormatLine: number;
	/** Seconds per unit of the time stamps in the data, time multiplier included. */
	stampUnit_s: number;
	remarks: ReadRemark[];
}

/** Time stamps of the samples, in the file's own unit; NaN marks a missing one. */
export interface StampColumn {
	readonly length: number;
	/** Stamps [from, to); a view or a copy, not to be written to. Cheapest in order, many at a time. */
	subarray(from: number, to: number): Float64Array;
}

/** What the data tell beside the values of the channels. */
export interface ComtradeTiming {
	sampleCount: number;
	stamps: StampColumn;
	remarks: ReadRemark[];
}

/** Data that have been looked through from end to end. */
export interface ComtradeData extends ComtradeTiming {
	/** Values in V, A or the unit as written. */
	samples: RowSamples;
	/** What is known only when every sample has been seen: asked for last. */
	survey(): { missingCounts: readonly number[]; statusActivity: StatusActivity[] };
}
