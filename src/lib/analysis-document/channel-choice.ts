import type { PointSystem } from '../harmonics/nominal-voltages';
import type { ChannelMapping } from '../harmonics/waveform-analysis';
import { suggestMappings, type SuggestionPoint } from '../recording/channel-suggestion';
import { LINE_TO_LINE_PHASES, type Phase } from '../recording/phase';
import type { OpenedCapture } from '../recording/read-capture';
import type { CaptureSource } from '../recording/sample-source';

/** A channel that gets figures. */
export interface ChosenChannel {
	mapping: ChannelMapping;
	/** Null where nothing tells the conductor; the mapping then holds a stand-in. */
	phase: Phase | null;
	reason: string;
}

export interface ChannelChoice {
	/** Conductors of the point, one channel each. */
	point: ChosenChannel[];
	/** Other alternating voltages and currents: further feeders, pairs beside a neutral, conductors not known. */
	additional: ChosenChannel[];
	leftOut: { name: string; reason: string }[];
}

/** The kind of system that the recorded voltages and currents point to; split phase cannot be told from them. */
export function likelySystem(content: OpenedCapture): PointSystem {
	const recorded: readonly { quantity: string; phaseHint: Phase | null }[] =
		content.kind === 'trend' ? content.series : content.channels;
	const hints = (quantity: string) =>
		new Set(recorded.filter((one) => one.quantity === quantity).map((one) => one.phaseHint));
	const voltages = hints('voltage');
	const isPair = (hint: Phase | null) => (LINE_TO_LINE_PHASES as readonly (Phase | null)[]).includes(hint);
	const toNeutral = [...voltages].filter((hint) => hint !== null && hint !== 'N' && !isPair(hint));
	if ([...voltages].some(isPair) && toNeutral.length === 0) return 'three-wire';
	const conductors = [...voltages, ...hints('current')].filter((hint) => hint !== 'N');
	if (conductors.some((hint) => hint !== null && hint !== 'L1')) return 'four-wire';
	const most = content.kind === 'trend' ? Infinity : 1;
	const isAlone = ['voltage', 'current'].every(
		(quantity) => recorded.filter((one) => one.quantity === quantity && one.phaseHint !== 'N').length <= most
	);
	return isAlone ? 'single-phase' : 'four-wire';
}

/** Which channels of a waveform are analysed, and as what; by suggestMappings, as the pages suggest it. */
export function chooseChannels(source: CaptureSource, point: SuggestionPoint): ChannelChoice {
	const choice: ChannelChoice = { point: [], additional: [], leftOut: [] };
	suggestMappings(source, point).forEach(({ channelIndex, mapping, reason }) => {
		const channel = source.channels[channelIndex]!;
		if (mapping) {
			choice.point.push({ mapping: { channelIndex, ...mapping }, phase: mapping.phase, reason });
			return;
		}
		const factor = factorOf(source, channelIndex, point);
		if (!factor) {
			choice.leftOut.push({ name: channel.name, reason });
			return;
		}
		const { phaseHint } = channel;
		choice.additional.push({
			mapping: { ...factor.mapping, channelIndex, phase: phaseHint ?? 'L1' },
			phase: phaseHint,
			reason: `${reason} ${factor.reason}`
		});
	});
	return choice;
}

/** Quantity and factor of a channel looked at by itself; null where it is no alternating voltage or current. */
function factorOf(source: CaptureSource, channelIndex: number, point: SuggestionPoint) {
	const channel = { ...source.channels[channelIndex]!, phaseHint: 'L1' as const };
	const [alone] = suggestMappings({ ...source, channels: [channel] }, { ...point, system: 'single-phase' });
	return alone?.mapping ? { mapping: alone.mapping, reason: alone.reason.replace(/^.*?\. /s, '') } : null;
}
