import type { CaptureSource } from '../../recording/sample-source';
import { err, ok, type Result } from '../../result';
import type { AnalysisProblem } from '../analysis-problem';
import { chooseReferenceChannel, type ReferenceChannel } from '../reference-channel';
import type { ChannelMapping, QualityRemark } from '../waveform-analysis';
import { neededDuration_s, planSegments, type SegmentPlan } from './segment-plan';
import { stretchDuration_s, stretchesOf, type Stretch } from './stretches';

/** Everything that is settled before the first window. Plain data: it crosses to other threads. */
export interface PreparedCapture {
	mappings: readonly ChannelMapping[];
	reference: ReferenceChannel;
	/** Position of the reference channel in `mappings`. */
	referencePosition: number;
	nominalFrequency_Hz: 50 | 60;
	cyclesPerWindow: 10 | 12;
	highestOrder: number;
	/** At least one, in order of time. */
	plans: SegmentPlan[];
	/** Positions in `mappings` of the voltage and the current of one conductor. */
	pairs: { voltage: number; current: number }[];
	remarks: QualityRemark[];
}

export function prepareCapture(
	source: CaptureSource,
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
	const stretches = stretchesOf(source);
	if (!stretches.ok) return stretches;
	const { list } = stretches.value;
	const longest = longestOf(list);
	const referred = chooseReferenceChannel(source, mappings, longest);
	if (!referred.ok) return referred;
	const reference = referred.value;
	const nominalFrequency_Hz = nominalFor(reference.frequency_Hz, statedFrequency_Hz);
	const cyclesPerWindow = nominalFrequency_Hz === 50 ? 10 : 12;
	const { plans, tooShort, tooSlow } = planSegments(list, reference.frequency_Hz, cyclesPerWindow);
	if (plans.length === 0) {
		return tooShort.length > 0
			? err(tooShortProblem(longestOf(tooShort), reference, cyclesPerWindow))
			: err(tooSlowProblem(longest, reference));
	}
	return ok({
		mappings,
		reference,
		referencePosition: mappings.findIndex((m) => m.channelIndex === reference.channelIndex),
		nominalFrequency_Hz,
		cyclesPerWindow,
		highestOrder: Math.max(...plans.map((plan) => plan.spectrum.highestOrder)),
		plans,
		pairs: pairChannels(mappings),
		remarks: [...stretches.value.remarks, ...describeLeftOut(list, plans, [...tooShort, ...tooSlow])]
	});
}

function longestOf(list: readonly Stretch[]): Stretch {
	return list.reduce((best, stretch) =>
		stretchDuration_s(stretch) > stretchDuration_s(best) ? stretch : best
	);
}

/** The stated nominal frequency where the first estimate is about within 15 % of it, else the nearer of 50 and 60. */
export function nominalFor(measured_Hz: number, stated_Hz: 50 | 60 | null): 50 | 60 {
	if (stated_Hz !== null && Math.abs(measured_Hz / stated_Hz - 1) <= 0.16) return stated_Hz;
	return measured_Hz < 55 ? 50 : 60;
}

/** Voltage to neutral and current of each conductor that has both, by position in `mappings`. */
export function pairChannels(mappings: readonly ChannelMapping[]): PreparedCapture['pairs'] {
	const pairs: PreparedCapture['pairs'] = [];
	mappings.forEach((mapping, current) => {
		if (mapping.quantity !== 'current' || mapping.phase === 'N') return;
		const voltage = mappings.findIndex((m) => m.quantity === 'voltage' && m.phase === mapping.phase);
		if (voltage >= 0) pairs.push({ voltage, current });
	});
	return pairs;
}

function tooSlowProblem({ samplingRate_Hz }: Stretch, reference: ReferenceChannel): AnalysisProblem {
	const need_Hz = Math.ceil(reference.frequency_Hz * 2.5);
	return {
		code: 'rate-too-low',
		sentence:
			`The sampling rate of ${samplingRate_Hz.toFixed(1)} Hz cannot carry a fundamental of ` +
			`${reference.frequency_Hz.toFixed(2)} Hz; at least ${need_Hz} Hz are needed, and 128 samples per cycle for order 50.`,
		have_Hz: samplingRate_Hz,
		need_Hz
	};
}

/** Also the answer where the tracker finds no whole window in a stretch that looked long enough. */
export function tooShortProblem(
	stretch: Stretch,
	reference: ReferenceChannel,
	cyclesPerWindow: 10 | 12
): AnalysisProblem {
	const have_s = stretchDuration_s(stretch);
	const plan = planSegments([{ ...stretch, toSample: Infinity }], reference.frequency_Hz, cyclesPerWindow)
		.plans[0]!;
	const need_s = neededDuration_s(plan);
	return {
		code: 'record-too-short',
		sentence:
			`The capture holds ${have_s.toFixed(4)} s at one rate; one window of ${cyclesPerWindow} cycles of ` +
			`${reference.frequency_Hz.toFixed(2)} Hz needs ${need_s.toFixed(4)} s, margins for the interpolation ` +
			`included. Record at least half a second; ten seconds or more are better.`,
		have_s,
		need_s
	};
}

function describeLeftOut(
	list: readonly Stretch[],
	plans: readonly SegmentPlan[],
	leftOut: readonly Stretch[]
): QualityRemark[] {
	if (list.length === 1) return [];
	const total_s = list.reduce((sum, stretch) => sum + stretchDuration_s(stretch), 0);
	const lost_s = leftOut.reduce((sum, stretch) => sum + stretchDuration_s(stretch), 0);
	const rates = [...new Set(plans.map((plan) => plan.stretch.samplingRate_Hz.toFixed(1)))];
	const shown = rates.length > 4 ? `${rates.slice(0, 3).join(', ')}, … Hz` : `${rates.join(', ')} Hz`;
	return [
		{
			severity: leftOut.length > 0 ? 'warns' : 'notes',
			code: leftOut.length > 0 ? 'stretches-left-out' : 'several-stretches',
			sentence:
				`The capture holds ${list.length} stretches, parted by gaps or changes of the sampling rate; each is analysed ` +
				`by itself, because windows cannot cross a border (${plans.length} with ${shown}).` +
				(leftOut.length > 0
					? ` ${leftOut.length} of them (${lost_s.toFixed(3)} s of ${total_s.toFixed(3)} s) hold no whole window, or ` +
						`were sampled too slowly, and are left out.`
					: ''),
			channelIndex: null
		}
	];
}
