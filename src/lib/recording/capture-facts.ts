import type { OpenedCapture } from './read-capture';
import { sourceOf, type CaptureSource, type SampleSource, type SourceChannel } from './sample-source';
import type {
	CaptureContent,
	ReadRemark,
	Recording,
	RecordingChannel,
	RecordingNote,
	RecordingStart,
	Trend
} from './recording';

/** What was recognised in an upload, shown before anything is analysed. */
export interface CaptureFacts {
	kind: 'waveform' | 'trend';
	format: string;
	variant: string;
	stationName: string;
	recorderName: string;
	channelCount: number;
	channels: ChannelFacts[];
	/** Lowest and highest sampling rate; null for a trend and where only time stamps tell the time. */
	samplingRate_Hz: { lowest: number; highest: number } | null;
	/** Spacing of a trend's rows; null for a waveform. */
	interval_s: number | null;
	/** Samples of a waveform, intervals of a trend. */
	sampleCount: number;
	duration_s: number;
	nominalFrequency_Hz: number | null;
	start: RecordingStart | null;
	/** Whether the values stand on the primary or the secondary side of the transformers, over all channels. */
	valuesAre: RecordingChannel['valuesAre'] | 'mixed';
	/** Highest order that the lowest rate supports at the nominal frequency; null where that cannot be said. */
	highestOrder: number | null;
	/** Free text that came with the recording; absent where none did. */
	notes?: RecordingNote[];
	remarks: ReadRemark[];
}

export interface ChannelFacts {
	name: string;
	unitAsWritten: string;
	quantity: RecordingChannel['quantity'];
	phaseHint: RecordingChannel['phaseHint'];
	valuesAre: RecordingChannel['valuesAre'];
	ratio: RecordingChannel['ratio'];
	/** Null where the samples have not been looked at yet: the analysis counts them. */
	missingCount: number | null;
}

/** Orders above this are never asked for (IEEE Std 519, IEC 61000-4-30 class A). */
const MAX_ORDER_ANALYSED = 50;

/**
 * A capture read into memory or one whose samples are still in their file.
 * pointFrequency_Hz  nominal frequency of the point, for the highest order where the file states none
 */
export function captureFacts(
	content: CaptureContent | OpenedCapture,
	pointFrequency_Hz: number | null = null
): CaptureFacts {
	if (content.kind === 'trend') return trendFacts(content);
	return waveformFacts('samples' in content ? content : sourceOf(content), pointFrequency_Hz);
}

/** Seconds from the first sample to the end of the last one, gaps included. */
export function recordingDuration_s(recording: Pick<Recording, 'segments' | 'timeStamps_s'>): number {
	const stamps = recording.timeStamps_s;
	if (stamps) {
		const last = stamps[stamps.length - 1] as number;
		return stamps.length < 2 ? 0 : last + last / (stamps.length - 1);
	}
	return recording.segments.reduce(
		(sum, { samplingRate_Hz, fromSample, toSample, gapBefore_s }) =>
			sum + (toSample - fromSample) / samplingRate_Hz + (gapBefore_s ?? 0),
		0
	);
}

function waveformFacts(recording: CaptureSource, pointFrequency_Hz: number | null): CaptureFacts {
	const rates = recording.segments.map(({ samplingRate_Hz }) => samplingRate_Hz);
	const samplingRate_Hz =
		rates.length === 0 ? null : { lowest: Math.min(...rates), highest: Math.max(...rates) };
	return {
		...commonFacts(recording),
		...(recording.notes ? { notes: recording.notes } : {}),
		kind: 'waveform',
		channelCount: recording.channels.length,
		channels: recording.channels.map((channel) => channelFacts(channel, recording.samples)),
		samplingRate_Hz,
		interval_s: null,
		sampleCount: recording.sampleCount,
		duration_s: recordingDuration_s(recording),
		valuesAre: sideOfAll(recording.channels),
		highestOrder: highestOrderOf(
			samplingRate_Hz?.lowest ?? null,
			recording.nominalFrequency_Hz ?? pointFrequency_Hz
		)
	};
}

function trendFacts(trend: Trend): CaptureFacts {
	const intervals = trend.intervalStarts_s;
	const last_s = intervals[intervals.length - 1];
	const orders = trend.series.flatMap(({ measure }) => (measure.kind === 'order' ? [measure.order] : []));
	return {
		...commonFacts(trend),
		kind: 'trend',
		channelCount: trend.series.length,
		channels: trend.series.map((series) => ({
			name: series.name,
			unitAsWritten: series.unit === 'percent-of-fundamental' ? '%' : series.unit,
			quantity: series.quantity,
			phaseHint: series.phaseHint,
			valuesAre: series.valuesAre ?? 'unknown',
			ratio: series.ratio ?? null,
			missingCount: missingIn(series.values)
		})),
		samplingRate_Hz: null,
		interval_s: trend.interval_s,
		sampleCount: intervals.length,
		duration_s: last_s === undefined ? 0 : last_s + trend.interval_s,
		valuesAre: sideOfAll(trend.series.map(({ valuesAre }) => ({ valuesAre: valuesAre ?? 'unknown' }))),
		highestOrder: orders.length === 0 ? null : Math.max(...orders)
	};
}

function commonFacts(content: OpenedCapture) {
	const { format, variant, stationName, recorderName, nominalFrequency_Hz, start, remarks } = content;
	return { format, variant, stationName, recorderName, nominalFrequency_Hz, start, remarks };
}

function channelFacts(channel: SourceChannel, samples: SampleSource): ChannelFacts {
	const { name, unitAsWritten, quantity, phaseHint, valuesAre, ratio } = channel;
	return {
		name,
		unitAsWritten,
		quantity,
		phaseHint,
		valuesAre,
		ratio,
		missingCount:
			channel.missingCount ?? (samples.kind === 'memory' ? missingIn(samples.channels[channel.index]!) : null)
	};
}

function missingIn(values: Float64Array): number {
	let missing = 0;
	for (let at = 0; at < values.length; at++) if (Number.isNaN(values[at] as number)) missing++;
	return missing;
}

function sideOfAll(channels: readonly Pick<SourceChannel, 'valuesAre'>[]): CaptureFacts['valuesAre'] {
	const sides = new Set(channels.map(({ valuesAre }) => valuesAre));
	const [only] = sides;
	return sides.size === 1 && only !== undefined ? only : 'mixed';
}

/**
 * Highest whole order whose subgroup (the order ± one bin of 5 Hz) lies below half the sampling rate,
 * at most the highest order analysed. Whether the recorder's own filter still lets it pass is another matter.
 */
function highestOrderOf(samplingRate_Hz: number | null, nominalFrequency_Hz: number | null): number | null {
	if (samplingRate_Hz === null || nominalFrequency_Hz === null) return null;
	const bin_Hz = 5;
	const order = Math.floor((samplingRate_Hz / 2 - bin_Hz) / nominalFrequency_Hz);
	return Math.max(0, Math.min(MAX_ORDER_ANALYSED, order));
}
