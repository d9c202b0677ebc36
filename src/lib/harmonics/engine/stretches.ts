import type { Recording } from '../../recording/recording';
import { err, ok, type Result } from '../../result';
import type { AnalysisProblem } from '../analysis-problem';
import type { QualityRemark } from '../waveform-analysis';

/** Evenly spaced samples without a gap. */
export interface Stretch {
	samplingRate_Hz: number;
	fromSample: number;
	/** exclusive */
	toSample: number;
	/** Time of `fromSample` after sample 0. */
	offset_s: number;
}

export interface Stretches {
	/** In order of time; at least one. */
	list: Stretch[];
	remarks: QualityRemark[];
}

type TimedRecording = Pick<Recording, 'segments' | 'timeStamps_s' | 'sampleCount'>;

/** Largest distance of a time stamp from an even grid, in sampling intervals. */
const STAMP_TOLERANCE = 0.25;

/** Whether the capture states no rate and its time stamps do not lie on an even grid. */
export function isUnevenlySampled(recording: TimedRecording): boolean {
	if (statedSegments(recording).length > 0 || !recording.timeStamps_s || recording.timeStamps_s.length < 3)
		return false;
	const grid = evenGrid(recording.timeStamps_s);
	return grid !== null && grid.worst > STAMP_TOLERANCE;
}

/**
 * The evenly sampled stretches of a recording; neighbours of one rate without a gap between them are joined.
 * returns  at least one stretch, or a problem when no rate can be had
 */
export function stretchesOf(recording: TimedRecording): Result<Stretches, AnalysisProblem> {
	const stated = statedSegments(recording);
	if (stated.length === 0) return inferStretch(recording);
	const list: Stretch[] = [];
	let elapsed_s = 0;
	for (const segment of stated) {
		const { samplingRate_Hz, fromSample, toSample, gapBefore_s } = segment;
		elapsed_s += gapBefore_s ?? 0;
		const before = list.at(-1);
		const joins =
			before?.samplingRate_Hz === samplingRate_Hz &&
			before.toSample === fromSample &&
			gapBefore_s === undefined;
		if (joins) before.toSample = toSample;
		else list.push({ samplingRate_Hz, fromSample, toSample, offset_s: elapsed_s });
		elapsed_s += (toSample - fromSample) / samplingRate_Hz;
	}
	return ok({ list, remarks: [] });
}

/** Length of a stretch. */
export function stretchDuration_s(stretch: Stretch): number {
	return (stretch.toSample - stretch.fromSample) / stretch.samplingRate_Hz;
}

function statedSegments(recording: TimedRecording) {
	return recording.segments.filter((s) => s.samplingRate_Hz > 0 && s.toSample > s.fromSample);
}

/** Mean step of the stamps and the greatest distance from the even grid it makes; null when they do not advance. */
function evenGrid(stamps_s: Float64Array): { step_s: number; worst: number; worstAt: number } | null {
	const last = stamps_s.length - 1;
	const step_s = (stamps_s[last]! - stamps_s[0]!) / last;
	if (!(step_s > 0)) return null;
	let worst = 0;
	let worstAt = 0;
	for (let i = 0; i <= last; i++) {
		const away = Math.abs((stamps_s[i]! - stamps_s[0]!) / step_s - i);
		if (away <= worst) continue;
		worst = away;
		worstAt = i;
		if (Number.isNaN(away)) break;
	}
	return { step_s, worst, worstAt };
}

function inferStretch(recording: TimedRecording): Result<Stretches, AnalysisProblem> {
	const stamps_s = recording.timeStamps_s;
	if (!stamps_s || stamps_s.length < 3) {
		return notKnown(
			'The capture states neither a sampling rate nor usable time stamps. Export it again with its sampling rate.'
		);
	}
	const grid = evenGrid(stamps_s);
	if (grid === null) {
		return notKnown(
			`The time stamps do not advance from ${stamps_s[0]} s to ${stamps_s.at(-1)} s. ` +
				`Export the capture again with its sampling rate, or with ascending time stamps.`
		);
	}
	const { step_s, worst, worstAt } = grid;
	if (!(worst <= STAMP_TOLERANCE)) {
		return notKnown(
			`The time stamps are not evenly spaced: sample ${worstAt} lies ` +
				`${Number.isNaN(worst) ? 'at no readable time' : `${worst.toFixed(2)} sampling intervals`} off an even ` +
				`grid of ${(step_s * 1e6).toFixed(3)} µs (at most ${STAMP_TOLERANCE} is allowed).`
		);
	}
	const samplingRate_Hz = 1 / step_s;
	return ok({
		list: [{ samplingRate_Hz, fromSample: 0, toSample: recording.sampleCount, offset_s: 0 }],
		remarks: [
			{
				severity: 'notes',
				code: 'rate-inferred',
				sentence:
					`The capture states no sampling rate. Its time stamps are even within ` +
					`${worst.toFixed(3)} sampling intervals, which gives ${samplingRate_Hz.toFixed(3)} Hz; ` +
					`check it against the recorder's setting.`,
				channelIndex: null
			}
		]
	});
}

function notKnown(sentence: string): Result<Stretches, AnalysisProblem> {
	return err({ code: 'rate-not-known', sentence });
}
