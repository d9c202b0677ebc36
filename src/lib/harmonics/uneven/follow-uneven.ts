import { taperedIntegral } from '../../numerics/fourier-integral/fourier-integral';
import { cutPieces, valuesOnPieces } from '../../numerics/fourier-integral/line-pieces';
import type { CaptureSource } from '../../recording/sample-source';
import { readStretch } from '../engine/read-stretch';
import type { SegmentPlan } from '../engine/segment-plan';
import type { TrackerSetup } from '../window-tracker';
import { instantOf } from './uneven-stretches';

/**
 * The reference channel of one stretch as the window tracker follows it: tones by exact integrals of the straight lines
 * between the samples. Places are mean steps, see UnevenStretches.
 */
export function followUneven(
	source: CaptureSource,
	stamps_s: Float64Array,
	channelIndex: number,
	{ stretch }: SegmentPlan
): Pick<TrackerSetup, 'reference' | 'phasorAt'> {
	const { fromSample, toSample, samplingRate_Hz } = stretch;
	const times = stamps_s.subarray(fromSample, toSample);
	const values = readStretch(source, [channelIndex], fromSample, toSample)[0]!;
	const last_s = times[times.length - 1]!;
	// The tracker asks of whole places only whether anything is missing there.
	const missing = new Float64Array(times.length);
	for (let i = 0; i < times.length; i++) {
		if (!Number.isNaN(values[i]!)) continue;
		const place = (times[i]! - times[0]!) * samplingRate_Hz;
		missing[Math.min(times.length - 1, Math.floor(place))] = NaN;
		missing[Math.min(times.length - 1, Math.ceil(place))] = NaN;
	}
	return {
		reference: { samples: missing, base: fromSample, cover: () => undefined },
		phasorAt: (centre, frequency, halfCycles) => {
			const half_s = halfCycles / (frequency * samplingRate_Hz);
			const centre_s = instantOf(stretch, stamps_s, centre);
			const pieces = cutPieces(
				times,
				Math.max(times[0]!, centre_s - half_s),
				Math.min(last_s, centre_s + half_s)
			);
			return taperedIntegral(pieces, valuesOnPieces(pieces, values), frequency * samplingRate_Hz);
		}
	};
}
