import { WHOLE_BAND_MARGIN } from '../../../harmonics/whole-band';
import type { WaveformSummary } from '../../analysis/analysis-summary';
import { bufferToFloat32, bufferToFloat64 } from '../../analysis/series-codec';
import type { AnalysisSeriesRow } from '../../db/rows';
import type { BlobStore } from '../../storage/blob-store';
import type { WindowRows } from './window-rows';

/** The samples of one window, for looking at it closely. */
export interface WindowSamples {
	samplingRate_Hz: number;
	/** Window in sample numbers of the arrays. */
	start: number;
	length: number;
	/** Window counted from 1. */
	window: number;
	/** Per channel index: samples in primary V or A, with a margin on either side. */
	byChannel: Map<number, Float64Array>;
}

/**
 * Reads the samples of the window in hand: the one asked for, or the first that is not flagged.
 * returns  null where the samples have time stamps of their own, or the window lies too near to an end of its stretch
 */
export async function windowSamples(
	blobs: BlobStore,
	summary: WaveformSummary,
	{ rows, windows, choice }: WindowRows,
	captureStart_ms: number
): Promise<WindowSamples | null> {
	const row = rows[0]!;
	// Taken together, the windows are shown by the first that has room for the interpolation on either side.
	const found = windows
		.slice(0, MOST_TRIED)
		.map((index) => ({ index, ...placeOf(row, index, summary, captureStart_ms) }))
		.find(
			({ from, to, start, length }) =>
				start - from >= WHOLE_BAND_MARGIN && to - start - length >= WHOLE_BAND_MARGIN
		);
	if (!found) return null;
	const { index, samplingRate_Hz, from, to, start, length } = found;
	const byChannel = new Map<number, Float64Array>();
	for (const { channelIndex, offset_bytes } of summary.samples.channels) {
		const bytes = await blobs.readSlice(summary.samples.sha256, offset_bytes + 4 * from, 4 * (to - from));
		byChannel.set(channelIndex, Float64Array.from(bufferToFloat32(bytes)));
	}
	return {
		samplingRate_Hz,
		start: start - from,
		length,
		window: choice.window ?? index + 1,
		byChannel
	};
}

/** Windows that are tried at most. */
const MOST_TRIED = 5;

/** Window and the samples around it, as far as its stretch holds them; NaN throughout where no stretch holds it. */
function placeOf(
	row: AnalysisSeriesRow,
	index: number,
	{ samples }: WaveformSummary,
	captureStart_ms: number
) {
	const from_s = (bufferToFloat64(row.starts_ms)[index]! - captureStart_ms) / 1000;
	const length_s = bufferToFloat64(row.lengths_s)[index]!;
	const segment = samples.segments.find(
		({ start_s, fromSample, toSample, samplingRate_Hz }) =>
			from_s >= start_s - 1e-6 && from_s + length_s <= start_s + (toSample - fromSample) / samplingRate_Hz
	);
	if (!segment) return { samplingRate_Hz: NaN, start: NaN, length: NaN, from: NaN, to: NaN };
	const { samplingRate_Hz, fromSample, toSample, start_s } = segment;
	const start = fromSample + (from_s - start_s) * samplingRate_Hz;
	const length = length_s * samplingRate_Hz;
	return {
		samplingRate_Hz,
		start,
		length,
		from: Math.max(fromSample, Math.floor(start) - WHOLE_BAND_MARGIN - 1),
		to: Math.min(toSample, Math.ceil(start + length) + WHOLE_BAND_MARGIN + 2)
	};
}
