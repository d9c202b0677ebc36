import type { RecordingStart, ReadRemark } from '../../recording';

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
	statusNames: string[];
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

/** Time stamps of the samples, in the file's own unit; NaN marks a missing one. Asked for mostly one after the other. */
export interface StampColumn {
	readonly length: number;
	at(sample: number): number | undefined;
	/** Stamps [from, to), for reading many of them; a view or a copy, not to be written to. */
	subarray(from: number, to: number): Float64Array;
}

/** What the data tell beside the values of the channels. */
export interface ComtradeTiming {
	sampleCount: number;
	stamps: StampColumn;
	remarks: ReadRemark[];
}

/** The data, unscaled. */
export interface ComtradeData extends ComtradeTiming {
	/** [analogue channels][sampleCount] raw values; NaN marks a missing one. */
	raw: Float64Array[];
}
