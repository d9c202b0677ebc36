import { formatPhase, type Phase, type PhaseNames } from '../recording/phase';
import type { CaptureSource } from '../recording/sample-source';
import type { FlatTops } from './engine/flat-tops';
import { stretchDuration_s, type Stretch } from './engine/stretches';
import type { CaptureEvent } from './flag-windows';
import { findClipping } from './quality/clipping';
import { findConnectionFaults, findNegativeRotation } from './quality/connection';
import { findDeadChannels } from './quality/dead-channel';
import { findDcOffsets, findImplausibleVoltages } from './quality/levels';
import { findSameSignals } from './quality/same-signal';
import { findFrequencyFaults, findMissingSamples, findRateLimits } from './quality/sampling';
import { findSwappedQuantities } from './quality/swapped-quantity';
import type { ChannelAnalysis, QualityRemark, QualitySeverity } from './waveform-analysis';

/** What an analysis gathered about a capture, beside its windows. Lists by position of the mapping. */
export interface InspectionContext {
	pointNominal_Hz: 50 | 60 | null;
	usedNominal_Hz: 50 | 60;
	/** Mean over the windows; the first estimate where no window has one. */
	frequency_Hz: number;
	referenceChannelIndex: number;
	cyclesPerWindow: 10 | 12;
	highestOrder: number;
	/** Those that were analysed, in order of time. */
	stretches: readonly Stretch[];
	/** One row each, over the whole capture. */
	channels: readonly ChannelAnalysis[];
	flatTops: readonly FlatTops[];
	missingSamples: readonly number[];
	windowsWithoutData: readonly number[];
	windowCount: number;
	/** Windows in which the fundamental could not be followed. */
	lostWindows: number;
	/** Sum of the windows' lengths. */
	used_s: number;
	nominalVoltages_V: Partial<Record<Phase, number>>;
	names: PhaseNames;
	/** null when no nominal voltage was given and nothing could be looked for. */
	events: readonly CaptureEvent[] | null;
}

const RANK: Record<QualitySeverity, number> = { blocks: 0, warns: 1, notes: 2 };
/** Events that get a sentence of their own; what is beyond is counted. */
const MOST_EVENTS_TOLD = 12;

/** Every check on the capture itself, gravest first. */
export function inspectCapture(source: CaptureSource, context: InspectionContext): QualityRemark[] {
	const { names, channels, frequency_Hz } = context;
	const mappings = channels.map((c) => c.mapping);
	const longest = context.stretches.reduce((a, b) => (stretchDuration_s(b) > stretchDuration_s(a) ? b : a));
	const { samplingRate_Hz } = longest;
	const remarks = [
		...findFrequencyFaults(
			source.nominalFrequency_Hz,
			context.pointNominal_Hz,
			context.usedNominal_Hz,
			frequency_Hz
		),
		...mappings.flatMap((mapping, m) =>
			findClipping(
				source.channels[mapping.channelIndex]!,
				context.flatTops[m]!,
				samplingRate_Hz / frequency_Hz
			)
		),
		...findImplausibleVoltages(source.channels, channels, context.nominalVoltages_V, names),
		...findDeadChannels(channels, names),
		...findSameSignals(channels, names),
		...findSwappedQuantities(source.channels, channels, context.nominalVoltages_V, names),
		...findConnectionFaults(channels, names),
		...findNegativeRotation(channels, names),
		...findRateLimits(samplingRate_Hz, frequency_Hz, context.highestOrder),
		...findMissingSamples(
			source.channels,
			mappings,
			context.missingSamples,
			context.stretches.reduce((sum, stretch) => sum + stretch.toSample - stretch.fromSample, 0),
			context.windowsWithoutData
		),
		...describeEvents(context),
		...describeLostFundamental(context),
		...findDcOffsets(channels),
		...describeTail(context)
	];
	return remarks.sort((a, b) => RANK[a.severity] - RANK[b.severity]);
}

function describeEvents({ events, channels, names }: InspectionContext): QualityRemark[] {
	if (events === null) {
		if (!channels.some((c) => c.mapping.quantity === 'voltage')) return [];
		return [
			note(
				'events-not-checked',
				'Dips, swells and interruptions were not looked for: the nominal voltage of the point is not known. Enter it, then analyse again.'
			)
		];
	}
	const told = events.slice(0, MOST_EVENTS_TOLD).map((event) => ({
		...note(
			event.kind,
			`${event.phases.map(({ phase }) => formatPhase(phase, names)).join(', ')}: ${event.kind} to ` +
				`${event.extreme_pct.toFixed(1)} % of nominal, ${event.start_s.toFixed(3)} s after the start, ` +
				`for ${(event.duration_s * 1000).toFixed(0)} ms${event.isOpen ? ' and on at the end of the record' : ''}. ` +
				`The windows it touches are flagged.`
		),
		channelIndex: event.phases.length === 1 ? event.phases[0]!.channelIndex : null
	}));
	if (events.length <= MOST_EVENTS_TOLD) return told;
	return [
		...told,
		note('more-events', `${events.length - MOST_EVENTS_TOLD} further dips, swells or interruptions follow.`)
	];
}

function describeLostFundamental(context: InspectionContext): QualityRemark[] {
	if (context.lostWindows === 0) return [];
	return [
		{
			severity: 'warns',
			code: 'fundamental-lost',
			channelIndex: context.referenceChannelIndex,
			sentence:
				`In ${context.lostWindows} of ${context.windowCount} windows the fundamental of the reference channel could not be followed ` +
				`(missing samples, an interruption or a jump of phase); the last frequency was held. Their figures are not ` +
				`synchronised: read them with care.`
		}
	];
}

function describeTail(context: InspectionContext): QualityRemark[] {
	const whole_s = context.stretches.reduce((sum, stretch) => sum + stretchDuration_s(stretch), 0);
	const unused_s = whole_s - context.used_s;
	const window_s = context.cyclesPerWindow / context.frequency_Hz;
	if (unused_s < 0.01 * whole_s && unused_s < window_s / 4) return [];
	return [
		note(
			'tail-not-used',
			`${unused_s.toFixed(3)} s of ${whole_s.toFixed(3)} s do not fill a window of ${context.cyclesPerWindow} cycles ` +
				`and are not used.`
		)
	];
}

function note(code: string, sentence: string): QualityRemark {
	return { severity: 'notes', code, channelIndex: null, sentence };
}
