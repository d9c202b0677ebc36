import type { SourceChannel } from '../../recording/sample-source';
import { MAX_ORDER } from '../intervals';
import type { ChannelMapping, QualityRemark } from '../waveform-analysis';

/** Samples per cycle that leave an ordinary anti-alias filter room above order 50. */
const COMFORTABLE_SAMPLES_PER_CYCLE = 128;
/** Range in which windows of 10 or 12 cycles are defined: −15 % of 50 Hz … +15 % of 60 Hz. */
const PERMITTED_HZ = { from: 42.5, to: 69 };
/** A fundamental measured on the very bound is inside; Hz. */
const BOUND_TOLERANCE_HZ = 0.005;

export function findRateLimits(
	samplingRate_Hz: number,
	frequency_Hz: number,
	highestOrder: number
): QualityRemark[] {
	const perCycle = samplingRate_Hz / frequency_Hz;
	if (highestOrder < MAX_ORDER) {
		return [
			{
				severity: 'warns',
				code: 'rate-too-low',
				channelIndex: null,
				sentence:
					`${samplingRate_Hz.toFixed(1)} Hz are ${perCycle.toFixed(1)} samples per cycle, enough for order ` +
					`${highestOrder} (up to 45 % of the rate; above it the recorder’s anti-alias filter falls). Orders above ` +
					`are not assessed and distortion is summed to order ${highestOrder} only; record with at least ` +
					`${COMFORTABLE_SAMPLES_PER_CYCLE} samples per cycle for order ${MAX_ORDER}.`
			}
		];
	}
	if (perCycle >= COMFORTABLE_SAMPLES_PER_CYCLE * 0.995) return [];
	return [
		{
			severity: 'notes',
			code: 'little-filter-margin',
			channelIndex: null,
			sentence:
				`${perCycle.toFixed(1)} samples per cycle reach order ${MAX_ORDER}, with little room for the recorder’s ` +
				`anti-alias filter. Check in its data sheet that the response is flat to ` +
				`${(MAX_ORDER * frequency_Hz).toFixed(0)} Hz.`
		}
	];
}

export function findFrequencyFaults(
	stated_Hz: number | null,
	pointNominal_Hz: 50 | 60 | null,
	usedNominal_Hz: 50 | 60,
	measured_Hz: number
): QualityRemark[] {
	const remarks: QualityRemark[] = [];
	if (
		measured_Hz < PERMITTED_HZ.from - BOUND_TOLERANCE_HZ ||
		measured_Hz > PERMITTED_HZ.to + BOUND_TOLERANCE_HZ
	) {
		remarks.push({
			severity: 'blocks',
			code: 'frequency-out-of-range',
			channelIndex: null,
			sentence:
				`The fundamental is ${measured_Hz.toFixed(3)} Hz, outside ${PERMITTED_HZ.from} … ${PERMITTED_HZ.to} Hz: the 10/12-cycle ` +
				`windows and the limits of public supply do not apply. Check the sampling rate stated by the file and ` +
				`the mapped channels.`
		});
		return remarks;
	}
	if (pointNominal_Hz !== null && pointNominal_Hz !== usedNominal_Hz) {
		remarks.push({
			severity: 'blocks',
			code: 'wrong-nominal-frequency',
			channelIndex: null,
			sentence:
				`The point is entered with ${pointNominal_Hz} Hz, the capture runs at ${measured_Hz.toFixed(3)} Hz and was ` +
				`analysed as ${usedNominal_Hz} Hz. Correct the point, or upload the capture that belongs to it.`
		});
	}
	if (stated_Hz !== null && stated_Hz > 0 && Math.abs(measured_Hz / stated_Hz - 1) > 0.1) {
		remarks.push({
			severity: 'warns',
			code: 'stated-frequency-differs',
			channelIndex: null,
			sentence:
				`The file states ${stated_Hz} Hz, its signals run at ${measured_Hz.toFixed(3)} Hz; the measured value is used ` +
				`(${usedNominal_Hz} Hz windows). Check that the file’s sampling rate is right.`
		});
	}
	return remarks;
}

export function findMissingSamples(
	sources: readonly SourceChannel[],
	mappings: readonly ChannelMapping[],
	missing: readonly number[],
	sampleCount: number,
	windowsWithoutData: readonly number[]
): QualityRemark[] {
	const remarks: QualityRemark[] = [];
	mappings.forEach((mapping, m) => {
		if (missing[m] === 0) return;
		remarks.push({
			severity: 'warns',
			code: 'missing-samples',
			channelIndex: mapping.channelIndex,
			sentence:
				`${sources[mapping.channelIndex]!.name}: ${missing[m]} of ${sampleCount} samples are missing; ${windowsWithoutData[m]} windows ` +
				`that need them stand as “no data” and are not filled in.`
		});
	});
	return remarks;
}
