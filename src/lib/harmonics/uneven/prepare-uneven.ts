import { readOnGrid } from '../../numerics/fourier-integral/line-pieces';
import type { CaptureSource } from '../../recording/sample-source';
import { err, ok, type Result } from '../../result';
import type { AnalysisProblem } from '../analysis-problem';
import { nominalFor, pairChannels, type PreparedCapture } from '../engine/prepare-capture';
import { readStretch } from '../engine/read-stretch';
import type { SegmentPlan } from '../engine/segment-plan';
import { stretchDuration_s, type Stretch } from '../engine/stretches';
import { MAX_ORDER } from '../intervals';
import { chooseReferenceChannel, type ReferenceChannel } from '../reference-channel';
import type { ChannelMapping, QualityRemark } from '../waveform-analysis';
import { faithfulOrders, LEAST_RESPONSE, unevenSpectrumDesign, type FaithfulOrders } from './faithful-order';
import { GAP_IN_MEDIAN_STEPS, unevenStretches, type StepFacts } from './uneven-stretches';

/** A stretch may look this much too short, because its frequency is only a first estimate yet. */
const SHORTEST_SHARE = 0.98;

/**
 * Settles everything before the first window of a capture that has time stamps and no even rate.
 * stamps_s  [sampleCount] seconds
 * returns   plans per stretch between gaps, with what the straight lines between the samples cost as a remark; or a problem
 */
export function prepareUneven(
	source: CaptureSource,
	stamps_s: Float64Array,
	mappings: readonly ChannelMapping[],
	statedFrequency_Hz: 50 | 60 | null
): Result<PreparedCapture, AnalysisProblem> {
	if (mappings.length === 0) {
		return err({
			code: 'no-mapped-channels',
			sentence:
				'No channel is mapped to a conductor. Map at least one voltage or current, then analyse again.'
		});
	}
	const parted = unevenStretches(stamps_s);
	if (!parted.ok) return parted;
	const { list, steps } = parted.value;
	const longest = list.reduce((a, b) => (stretchDuration_s(b) > stretchDuration_s(a) ? b : a));
	const referred = firstLook(source, stamps_s, mappings, longest);
	if (!referred.ok) return referred;
	const reference = referred.value;
	const nominalFrequency_Hz = nominalFor(reference.frequency_Hz, statedFrequency_Hz);
	const cyclesPerWindow = nominalFrequency_Hz === 50 ? 10 : 12;
	const window_s = cyclesPerWindow / reference.frequency_Hz;
	const longEnough = list.filter(
		(stretch) => stampedDuration_s(stretch, stamps_s) >= SHORTEST_SHARE * window_s
	);
	if (longEnough.length === 0) {
		return err(unevenTooShort(stampedDuration_s(longest, stamps_s), reference, cyclesPerWindow));
	}
	const plans: SegmentPlan[] = [];
	const kept: FaithfulOrders[] = [];
	for (const stretch of longEnough) {
		const faithful = faithfulOrders(
			stamps_s.subarray(stretch.fromSample, stretch.toSample),
			reference.frequency_Hz,
			cyclesPerWindow
		);
		if (faithful.highest < 1) continue;
		kept.push(faithful);
		const spectrum = unevenSpectrumDesign(faithful.highest, cyclesPerWindow);
		plans.push({ stretch, cyclesPerWindow, frequency_Hz: reference.frequency_Hz, spectrum });
	}
	if (plans.length === 0) return err(tooCoarse(longest, reference));
	return ok({
		mappings,
		reference,
		referencePosition: mappings.findIndex((m) => m.channelIndex === reference.channelIndex),
		nominalFrequency_Hz,
		cyclesPerWindow,
		highestOrder: Math.max(...plans.map((plan) => plan.spectrum.highestOrder)),
		plans,
		pairs: pairChannels(mappings),
		remarks: [describeJoining(steps, plans, kept), ...describeGaps(steps, list, plans, stamps_s)]
	});
}

/** Which channel to follow, and about how fast it turns: seen on an even grid, which serves for nothing else. */
function firstLook(
	source: CaptureSource,
	stamps_s: Float64Array,
	mappings: readonly ChannelMapping[],
	{ samplingRate_Hz, fromSample, toSample }: Stretch
): Result<ReferenceChannel, AnalysisProblem> {
	const indexes = mappings.map((m) => m.channelIndex);
	const times = stamps_s.subarray(fromSample, toSample);
	const count = toSample - fromSample;
	const channels: Float64Array[] = source.channels.map(() => new Float64Array(0));
	readStretch(source, indexes, fromSample, toSample).forEach((samples, m) => {
		channels[indexes[m]!] = readOnGrid(times, samples, times[0]!, 1 / samplingRate_Hz, count);
	});
	return chooseReferenceChannel(
		{ ...source, sampleCount: count, samples: { kind: 'memory', channels } },
		mappings,
		{ samplingRate_Hz, fromSample: 0, toSample: count, offset_s: 0 }
	);
}

/** From the first to the last sample. */
function stampedDuration_s({ fromSample, toSample }: Stretch, stamps_s: Float64Array): number {
	return stamps_s[toSample - 1]! - stamps_s[fromSample]!;
}

export function unevenTooShort(
	have_s: number,
	reference: ReferenceChannel,
	cyclesPerWindow: 10 | 12
): AnalysisProblem {
	const need_s = cyclesPerWindow / reference.frequency_Hz;
	return {
		code: 'record-too-short',
		sentence:
			`The capture, whose time stamps are uneven, holds ${have_s.toFixed(4)} s without a gap; one window of ` +
			`${cyclesPerWindow} cycles of ${reference.frequency_Hz.toFixed(2)} Hz needs ${need_s.toFixed(4)} s. ` +
			`Record at least half a second; ten seconds or more are better.`,
		have_s,
		need_s
	};
}

function tooCoarse(stretch: Stretch, reference: ReferenceChannel): AnalysisProblem {
	// sinc²(x) = 0.95 at x = 0.1245: with even steps a little more than eight samples per cycle.
	const need_Hz = Math.ceil(reference.frequency_Hz / 0.1245);
	return {
		code: 'rate-too-low',
		sentence:
			`The samples lie too far apart (${stretch.samplingRate_Hz.toFixed(1)} per second on average) to be joined by ` +
			`straight lines: even the fundamental of ${reference.frequency_Hz.toFixed(2)} Hz would read more than ` +
			`${percent(1 - LEAST_RESPONSE)} % low. At least ${need_Hz} samples per second are needed.`,
		have_Hz: stretch.samplingRate_Hz,
		need_Hz
	};
}

function describeJoining(
	steps: StepFacts,
	plans: readonly SegmentPlan[],
	kept: readonly FaithfulOrders[]
): QualityRemark {
	const orders = plans.map((plan) => plan.spectrum.highestOrder);
	const lowest = Math.min(...orders);
	const highest = Math.max(...orders);
	const lostOfFundamental = 1 - Math.min(...kept.map((k) => k.leastOfFundamental));
	const lostOfHighest = 1 - Math.min(...kept.map((k) => k.leastOfHighest));
	return {
		severity: 'warns',
		code: 'uneven-sampling',
		channelIndex: null,
		sentence:
			`The capture states no sampling rate and its time stamps are uneven: steps of ${microseconds(steps.shortest_s)} to ` +
			`${microseconds(steps.longest_s)} µs, ${microseconds(steps.median_s)} µs at the median. Its samples are joined by ` +
			`straight lines and the Fourier integral of these is taken exactly; nothing is corrected for what the lines cut ` +
			`off. They take up to ${percent(lostOfFundamental)} % of the fundamental and ${percent(lostOfHighest)} % of order ` +
			(lowest === MAX_ORDER
				? `${MAX_ORDER}, the highest that is looked for.`
				: `${lowest < highest ? `${lowest} to ${highest}` : highest}, the highest given: above it more than ` +
					`${percent(1 - LEAST_RESPONSE)} % of the reading could be lost. Distortion is summed no further.`)
	};
}

function describeGaps(
	steps: StepFacts,
	list: readonly Stretch[],
	plans: readonly SegmentPlan[],
	stamps_s: Float64Array
): QualityRemark[] {
	if (steps.gaps === 0) return [];
	const whole_s = list.reduce((sum, stretch) => sum + stampedDuration_s(stretch, stamps_s), 0);
	const used_s = plans.reduce((sum, { stretch }) => sum + stampedDuration_s(stretch, stamps_s), 0);
	const leftOut = whole_s - used_s;
	return [
		{
			severity: 'warns',
			code: 'gaps-between-samples',
			channelIndex: null,
			sentence:
				`The time stamps leave ${steps.gaps === 1 ? 'one gap' : `${steps.gaps} gaps`} (steps of more than ` +
				`${GAP_IN_MEDIAN_STEPS} times the median of ${microseconds(steps.median_s)} µs). No window spans a gap; ` +
				`each of the ${plans.length} stretches between them is analysed by itself` +
				(leftOut > 0
					? `, and ${leftOut.toFixed(3)} s of ${whole_s.toFixed(3)} s lie in stretches that hold no whole window.`
					: '.')
		}
	];
}

function microseconds(seconds: number): string {
	return String(Number((seconds * 1e6).toPrecision(4)));
}

function percent(share: number): string {
	return String(Number((100 * share).toPrecision(2)));
}
