import type { Recording } from '../recording/recording';
import { err, ok, type Result } from '../result';
import type { AnalysisProblem } from './analysis-problem';
import type { QualityRemark } from './waveform-analysis';

/** The stretch of evenly spaced samples that gets analysed. */
export interface TimeBase {
	samplingRate_Hz: number;
	fromSample: number;
	/** exclusive */
	toSample: number;
	/** Time of `fromSample` after sample 0. */
	offset_s: number;
	remarks: QualityRemark[];
}

/** Largest distance of a time stamp from an even grid, in sampling intervals. */
const STAMP_TOLERANCE = 0.25;

/**
 * Picks the longest evenly sampled stretch of a recording.
 * returns  the stretch, with remarks on what is left out; or a problem when no rate can be had
 */
export function chooseTimeBase(recording: Recording): Result<TimeBase, AnalysisProblem> {
	const stated = recording.segments.filter((s) => s.samplingRate_Hz > 0 && s.toSample > s.fromSample);
	if (stated.length === 0) return inferTimeBase(recording);
	let longest = stated[0]!;
	for (const segment of stated) {
		if (duration_s(segment) > duration_s(longest)) longest = segment;
	}
	let offset_s = 0;
	for (const segment of recording.segments) {
		if (segment.fromSample >= longest.fromSample) break;
		if (segment.samplingRate_Hz > 0) offset_s += duration_s(segment);
	}
	return ok({
		samplingRate_Hz: longest.samplingRate_Hz,
		fromSample: longest.fromSample,
		toSample: longest.toSample,
		offset_s,
		remarks: stated.length > 1 ? [leftOutRemark(recording, longest)] : []
	});
}

function duration_s(segment: { samplingRate_Hz: number; fromSample: number; toSample: number }): number {
	return (segment.toSample - segment.fromSample) / segment.samplingRate_Hz;
}

function leftOutRemark(recording: Recording, used: Recording['segments'][number]): QualityRemark {
	const total_s = recording.segments.reduce((sum, s) => sum + (s.samplingRate_Hz > 0 ? duration_s(s) : 0), 0);
	return {
		severity: 'warns',
		code: 'other-rates-left-out',
		sentence:
			`The capture holds ${recording.segments.length} stretches with sampling rates of their own. The longest ` +
			`is analysed (${duration_s(used).toFixed(3)} s of ${total_s.toFixed(3)} s, ` +
			`${used.samplingRate_Hz.toFixed(1)} Hz); windows cannot cross a change of rate. ` +
			`Record at one rate when the whole length matters.`,
		channelIndex: null
	};
}

function inferTimeBase(recording: Recording): Result<TimeBase, AnalysisProblem> {
	const stamps_s = recording.timeStamps_s;
	if (!stamps_s || stamps_s.length < 3) {
		return notKnown(
			'The capture states neither a sampling rate nor usable time stamps. Export it again with its sampling rate.'
		);
	}
	const last = stamps_s.length - 1;
	const step_s = (stamps_s[last]! - stamps_s[0]!) / last;
	if (!(step_s > 0)) {
		return notKnown(
			`The time stamps do not advance from ${stamps_s[0]} s to ${stamps_s[last]} s. ` +
				`Export the capture again with its sampling rate, or with ascending time stamps.`
		);
	}
	let worst = 0;
	let worstAt = 0;
	for (let i = 0; i <= last; i++) {
		const away = Math.abs((stamps_s[i]! - stamps_s[0]!) / step_s - i);
		if (!(away <= worst)) {
			worst = away;
			worstAt = i;
			if (away !== away) break;
		}
	}
	if (!(worst <= STAMP_TOLERANCE)) {
		return notKnown(
			`The time stamps are not evenly spaced: sample ${worstAt} lies ` +
				`${Number.isNaN(worst) ? 'at no readable time' : `${worst.toFixed(2)} sampling intervals`} off an even ` +
				`grid of ${(step_s * 1e6).toFixed(3)} µs (at most ${STAMP_TOLERANCE} is allowed). Samples are missing, or ` +
				`the clock is too coarse; export the capture at a constant rate and with that rate stated.`
		);
	}
	return ok({
		samplingRate_Hz: 1 / step_s,
		fromSample: 0,
		toSample: recording.sampleCount,
		offset_s: 0,
		remarks: [
			{
				severity: 'notes',
				code: 'rate-inferred',
				sentence:
					`The capture states no sampling rate. Its time stamps are even within ` +
					`${worst.toFixed(3)} sampling intervals, which gives ${(1 / step_s).toFixed(3)} Hz; ` +
					`check it against the recorder's setting.`,
				channelIndex: null
			}
		]
	});
}

function notKnown(sentence: string): Result<TimeBase, AnalysisProblem> {
	return err({ code: 'rate-not-known', sentence });
}
