import { formatPhase, type Phase, type PhaseNames } from '../recording/phase';
import type { Recording } from '../recording/recording';
import type { ChannelEvent } from './flag-windows';
import { findClipping } from './quality/clipping';
import { findConnectionFaults, findNegativeRotation } from './quality/connection';
import { findDeadChannels } from './quality/dead-channel';
import { findDcOffsets, findImplausibleVoltages } from './quality/levels';
import { findFrequencyFaults, findMissingSamples, findRateLimits } from './quality/sampling';
import type { TimeBase } from './time-base';
import type { QualityRemark, QualitySeverity, WaveformAnalysis } from './waveform-analysis';

export interface InspectionContext {
	pointNominal_Hz: 50 | 60 | null;
	/** First estimate of the fundamental, used where no window has one. */
	measured_Hz: number;
	nominalVoltages_V: Partial<Record<Phase, number>>;
	names: PhaseNames;
	events: ChannelEvent[] | null;
}

const RANK: Record<QualitySeverity, number> = { blocks: 0, warns: 1, notes: 2 };

/** Every check on the capture itself, gravest first. */
export function inspectCapture(
	recording: Recording,
	analysis: WaveformAnalysis,
	base: TimeBase,
	context: InspectionContext
): QualityRemark[] {
	const frequency_Hz = meanFrequency(analysis) ?? context.measured_Hz;
	const { names } = context;
	const mappings = analysis.channels.map((c) => c.mapping);
	const perCycle = base.samplingRate_Hz / frequency_Hz;
	const withoutData = (index: number) =>
		analysis.channels
			.find((c) => c.mapping.channelIndex === index)!
			.rms.reduce((count, rms) => count + (Number.isNaN(rms) ? 1 : 0), 0);
	const remarks = [
		...findFrequencyFaults(recording, context.pointNominal_Hz, analysis.nominalFrequency_Hz, frequency_Hz),
		...mappings.flatMap((m) =>
			findClipping(recording.channels[m.channelIndex]!, base.fromSample, base.toSample, perCycle)
		),
		...findImplausibleVoltages(recording, analysis.channels, context.nominalVoltages_V, names),
		...findDeadChannels(analysis.channels, names),
		...findConnectionFaults(analysis.channels, names),
		...findNegativeRotation(analysis.channels, names),
		...findRateLimits(base.samplingRate_Hz, frequency_Hz, analysis.highestOrder),
		...findMissingSamples(recording, mappings, base.fromSample, base.toSample, (m) =>
			withoutData(m.channelIndex)
		),
		...describeEvents(context.events, analysis, base, names),
		...describeLostFundamental(analysis),
		...findDcOffsets(analysis.channels),
		...describeTail(analysis, base)
	];
	return remarks.sort((a, b) => RANK[a.severity] - RANK[b.severity]);
}

function meanFrequency(analysis: WaveformAnalysis): number | null {
	const measured = analysis.frequency_Hz.filter((f) => !Number.isNaN(f));
	return measured.length > 0 ? measured.reduce((sum, f) => sum + f, 0) / measured.length : null;
}

function describeEvents(
	events: ChannelEvent[] | null,
	analysis: WaveformAnalysis,
	base: TimeBase,
	names: PhaseNames
): QualityRemark[] {
	if (events === null) {
		if (!analysis.channels.some((c) => c.mapping.quantity === 'voltage')) return [];
		return [
			note(
				'events-not-checked',
				'Dips, swells and interruptions were not looked for: the nominal voltage of the point is not known. Enter it, then analyse again.'
			)
		];
	}
	return events.map((event) => ({
		...note(
			event.kind,
			`${formatPhase(event.phase, names)}: ${event.kind} to ${event.extreme_pct.toFixed(1)} % of nominal, ` +
				`${((event.from - base.fromSample) / base.samplingRate_Hz + base.offset_s).toFixed(3)} s after the start, ` +
				`for ${(((event.to - event.from) / base.samplingRate_Hz) * 1000).toFixed(0)} ms. The windows it touches are flagged.`
		),
		channelIndex: event.channelIndex
	}));
}

function describeLostFundamental(analysis: WaveformAnalysis): QualityRemark[] {
	const lost = analysis.frequency_Hz.reduce((count, f) => count + (Number.isNaN(f) ? 1 : 0), 0);
	if (lost === 0) return [];
	return [
		{
			severity: 'warns',
			code: 'fundamental-lost',
			channelIndex: analysis.referenceChannelIndex,
			sentence:
				`In ${lost} of ${analysis.windowCount} windows the fundamental of the reference channel could not be followed ` +
				`(missing samples, an interruption or a jump of phase); the last frequency was held. Their figures are not ` +
				`synchronised: read them with care.`
		}
	];
}

function describeTail(analysis: WaveformAnalysis, base: TimeBase): QualityRemark[] {
	const last = analysis.windowCount - 1;
	const used_s =
		analysis.windowStarts_s[last]! + analysis.windowLengths_s[last]! - analysis.windowStarts_s[0]!;
	const whole_s = (base.toSample - base.fromSample) / base.samplingRate_Hz;
	const unused_s = whole_s - used_s;
	if (unused_s < 0.01 * whole_s && unused_s < analysis.windowLengths_s[last]! / 4) return [];
	return [
		note(
			'tail-not-used',
			`${unused_s.toFixed(3)} s of ${whole_s.toFixed(3)} s do not fill a window of ${analysis.cyclesPerWindow} cycles ` +
				`and are not used.`
		)
	];
}

function note(code: string, sentence: string): QualityRemark {
	return { severity: 'notes', code, channelIndex: null, sentence };
}
