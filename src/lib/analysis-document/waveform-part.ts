import { nominalVoltagesByPhase_V } from '../harmonics/nominal-voltages';
import type { QualityRemark } from '../harmonics/waveform-analysis';
import type { CaptureSource } from '../recording/sample-source';
import { err, ok, type Result } from '../result';
import { suggestionPointOf, systemOf, type AnalysisRequest } from './analysis-request';
import { chooseChannels, type ChannelChoice, type ChosenChannel } from './channel-choice';
import { channelEntry, referenceOf, silentChannels } from './channel-entry';
import type { AnalysisDocument, ChannelEntry } from './document-schema';
import { measureWaveform, type MeasuredWaveform } from './measure-waveform';
import { powersEntries, unbalanceEntry } from './powers-entry';
import { rounded } from './rounded';

/** What depends on the kind of capture. */
export type CapturePart = Omit<AnalysisDocument, 'recording' | 'schema' | 'system' | 'systemFrom'>;

/** Remarks that hold for a channel by itself, whatever conductor it may belong to. */
const OWN_REMARKS = new Set(['clipped', 'dead-channel', 'missing-samples', 'dc-offset', 'half-waves-differ']);

/** A waveform as its part of the document; a problem is a sentence. */
export function waveformPart(
	source: CaptureSource,
	request: AnalysisRequest,
	start_ms: number | null
): Result<CapturePart, string> {
	const point = suggestionPointOf(request);
	const choice = chooseChannels(source, point);
	const first = choice.point.length > 0 ? choice.point : choice.additional;
	if (first.length === 0)
		return err(
			`${request.files[0]!.name} holds no channel that its unit or name calls an alternating voltage or current; ` +
				`write the units (V, kV, A) into the headings or the configuration and run the analysis again.`
		);
	const measure = (channels: readonly ChosenChannel[]) => measureChosen(source, channels, request, start_ms);
	const main = measure(first);
	if (!main.ok) return main;
	const { findings, counts, series, power, sequences } = main.value;
	const reference = referenceOf(source, main.value.means, findings);
	const isPoint = choice.point.length > 0;
	const entries = entriesOf(first, isPoint ? 'point' : 'additional', source, main.value, reference.angle_deg);
	const beside = isPoint ? measureBeside(source, choice, reference.channelIndex, measure) : null;
	const { judged } = request;
	return ok({
		intervals: counts,
		channels: inFileOrder([...entries, ...(beside?.entries ?? [])]),
		...(judged && {
			assessment: judged.judge(
				{
					system: point.system,
					nominalFrequency_Hz: request.nominalFrequency_Hz ?? findings.nominalFrequency_Hz,
					timeZone: request.timeZone
				},
				isPoint ? series : []
			)
		}),
		engineVersion: findings.engineVersion,
		nominalFrequency_Hz: findings.nominalFrequency_Hz,
		highestOrder: findings.highestOrder,
		phaseReference: reference.name,
		leftOut: [...choice.leftOut, ...(beside?.leftOut ?? [])],
		powers: isPoint ? powersEntries(power) : [],
		unbalance: unbalanceEntry(isPoint ? sequences : null),
		events: eventEntries(main.value),
		flicker: flickerEntries(main.value),
		remarks: remarkEntries([...findings.quality, ...(beside?.quality ?? [])], source)
	});
}

function measureChosen(
	source: CaptureSource,
	channels: readonly ChosenChannel[],
	request: AnalysisRequest,
	start_ms: number | null
): Result<MeasuredWaveform, string> {
	const { phaseNames } = suggestionPointOf(request);
	const facts = request.judged?.facts;
	const system = systemOf(request);
	return measureWaveform(
		source,
		channels.map(({ mapping }) => mapping),
		system,
		start_ms,
		{
			nominalFrequency_Hz: request.nominalFrequency_Hz ?? facts?.nominalFrequency_Hz ?? null,
			phaseNames,
			...(facts && { nominalVoltages_V: nominalVoltagesByPhase_V(system, facts.nominalVoltage_V) })
		}
	);
}

interface PlacedEntry {
	channelIndex: number;
	entry: ChannelEntry;
}

function entriesOf(
	channels: readonly ChosenChannel[],
	use: ChannelEntry['use'],
	source: CaptureSource,
	{ means, findings }: MeasuredWaveform,
	reference_deg: number
): PlacedEntry[] {
	const silent = silentChannels(means);
	return channels.map((chosen) => {
		const { channelIndex } = chosen.mapping;
		const own = means.find(({ mapping }) => mapping.channelIndex === channelIndex)!;
		const isSilent = silent.has(channelIndex);
		return {
			channelIndex,
			entry: channelEntry(chosen, use, source, own, findings, { isSilent, reference_deg })
		};
	});
}

function inFileOrder(entries: PlacedEntry[]): ChannelEntry[] {
	return entries.sort((a, b) => a.channelIndex - b.channelIndex).map(({ entry }) => entry);
}

/**
 * Channels beside those of the point, in a pass of their own: they would disturb what is told from the conductors
 * together (powers, sequences, connection). The channel of reference comes along and sets the same windows.
 */
function measureBeside(
	source: CaptureSource,
	choice: ChannelChoice,
	referenceIndex: number,
	measure: (channels: readonly ChosenChannel[]) => Result<MeasuredWaveform, string>
): { entries: PlacedEntry[]; quality: QualityRemark[]; leftOut: ChannelChoice['leftOut'] } | null {
	if (choice.additional.length === 0) return null;
	const leading = choice.point.find(({ mapping }) => mapping.channelIndex === referenceIndex)!;
	const measured = measure([leading, ...choice.additional]);
	if (!measured.ok) {
		const nameOf = ({ mapping }: ChosenChannel) => source.channels[mapping.channelIndex]!.name;
		const leftOut = choice.additional.map((one) => ({ name: nameOf(one), reason: measured.problem }));
		return { entries: [], quality: [], leftOut };
	}
	const { means, findings } = measured.value;
	const indexes = new Set(choice.additional.map(({ mapping }) => mapping.channelIndex));
	const angle_deg = means[0]!.firstPhases_deg[1]!;
	return {
		entries: entriesOf(
			choice.additional,
			'additional',
			source,
			measured.value,
			Number.isNaN(angle_deg) ? 0 : angle_deg
		),
		quality: findings.quality.filter(
			({ code, channelIndex }) => channelIndex !== null && indexes.has(channelIndex) && OWN_REMARKS.has(code)
		),
		leftOut: []
	};
}

function eventEntries({ findings }: MeasuredWaveform): AnalysisDocument['events'] {
	if (!findings.events) return null;
	return findings.events.map(({ kind, start_s, duration_s, extreme_pct, phases }) => ({
		kind,
		start_s: rounded(start_s) ?? 0,
		duration_s: rounded(duration_s) ?? 0,
		extreme_percent: rounded(extreme_pct) ?? 0,
		phases: phases.map(({ phase }) => phase)
	}));
}

function flickerEntries({ findings }: MeasuredWaveform): AnalysisDocument['flicker'] {
	const timeOf = (start_ms: number) => new Date(start_ms).toISOString();
	return findings.flicker.map(({ phase, shortTerm, longTerm }) => ({
		phase,
		shortTerm: shortTerm.map(({ start_ms, pst }) => ({ startTime: timeOf(start_ms), pst: rounded(pst) })),
		longTerm: longTerm.map(({ start_ms, plt }) => ({ startTime: timeOf(start_ms), plt: rounded(plt) }))
	}));
}

function remarkEntries(
	quality: readonly QualityRemark[],
	source: CaptureSource
): AnalysisDocument['remarks'] {
	return quality.map(({ severity, code, channelIndex, sentence }) => ({
		severity,
		code,
		channel: channelIndex === null ? null : source.channels[channelIndex]!.name,
		sentence
	}));
}
