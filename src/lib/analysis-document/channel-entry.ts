import { crestFactor } from '../harmonics/crest-factor';
import { hasFundamental, thd_pctOfFundamental } from '../harmonics/distortion';
import { eddyLossFactor } from '../harmonics/losses/loss-factors';
import { wrapDegrees } from '../harmonics/phasor';
import { DEAD_SHARE } from '../harmonics/quality/dead-channel';
import type { CaptureFindings } from '../harmonics/waveform-analysis';
import type { CaptureSource } from '../recording/sample-source';
import type { ChannelMeans } from './capture-means';
import type { ChosenChannel } from './channel-choice';
import type { ChannelEntry } from './document-schema';
import { rounded, roundedAngle_deg, roundedLevel } from './rounded';

/** What of an entry follows from its levels. */
type LevelFields = Pick<
	ChannelEntry,
	'thd40_percent' | 'thd50_percent' | 'thdSubgroup_percent' | 'kFactor' | 'orders'
>;

/** The levels of a channel by order, index = order; NaN = no data. */
export interface ChannelLevels {
	quantity: 'voltage' | 'current';
	rms: number;
	components: Float64Array;
	subgroups: Float64Array;
	phases_deg: Float64Array;
	/** Orders that are listed, ascending. */
	listed: readonly number[];
	/** False where there is no signal whose shape could be told. */
	hasSignal: boolean;
}

/** Distortion and orders of one channel. */
export function levelFields(levels: ChannelLevels): LevelFields {
	const { quantity, rms, components, subgroups, phases_deg, listed, hasSignal } = levels;
	const distortion = (row: Float64Array, toOrder: number) =>
		hasSignal ? rounded(thd_pctOfFundamental(row, rms, toOrder)) : null;
	const hasBasis = hasSignal && hasFundamental(components, rms);
	return {
		thd40_percent: distortion(components, 40),
		thd50_percent: distortion(components, 50),
		thdSubgroup_percent: distortion(subgroups, 50),
		kFactor: quantity === 'current' && hasSignal ? rounded(eddyLossFactor(components, 50)) : null,
		orders: listed.map((order) => ({
			order,
			magnitude: roundedLevel(components[order]!, rms),
			percent: hasBasis ? roundedLevel((100 * components[order]!) / components[1]!, 100) : null,
			phase_deg: hasSignal ? roundedAngle_deg(phases_deg[order]!, components[order]!, rms) : null,
			subgroup: roundedLevel(subgroups[order]!, rms)
		}))
	};
}

/**
 * Channels so weak beside the strongest of their quantity that they hold noise: no frequency, distortion or angles of
 * their own. Neutrals are no exception: what is left of a balanced load has no shape worth a figure.
 */
export function silentChannels(means: readonly ChannelMeans[]): Set<number> {
	const level = ({ rms, dc }: ChannelMeans) => Math.sqrt(Math.max(0, rms * rms - dc * dc));
	const strongest = { voltage: 0, current: 0 };
	for (const one of means) {
		const { quantity } = one.mapping;
		if (level(one) > strongest[quantity]) strongest[quantity] = level(one);
	}
	const silent = means.filter((one) => !(level(one) > DEAD_SHARE * strongest[one.mapping.quantity]));
	return new Set(silent.map(({ mapping }) => mapping.channelIndex));
}

/** Angle of the fundamental that all angles of the document are referred to; null where no voltage has one. */
export function referenceOf(
	source: CaptureSource,
	means: readonly ChannelMeans[],
	findings: CaptureFindings
): { channelIndex: number; name: string; angle_deg: number } {
	const silent = silentChannels(means);
	const first = means
		.filter(({ mapping, firstPhases_deg }) => {
			if (mapping.quantity !== 'voltage' || mapping.phase === 'N') return false;
			return !silent.has(mapping.channelIndex) && !Number.isNaN(firstPhases_deg[1]!);
		})
		.sort((a, b) => a.mapping.channelIndex - b.mapping.channelIndex)[0];
	const channelIndex = first?.mapping.channelIndex ?? findings.referenceChannelIndex;
	const angle_deg = first?.firstPhases_deg[1] ?? 0;
	return { channelIndex, name: source.channels[channelIndex]!.name, angle_deg };
}

/** One analysed channel as the document lists it. */
export function channelEntry(
	chosen: ChosenChannel,
	use: ChannelEntry['use'],
	source: CaptureSource,
	means: ChannelMeans,
	findings: CaptureFindings,
	{ isSilent, reference_deg }: { isSilent: boolean; reference_deg: number }
): ChannelEntry {
	const { channelIndex, quantity, toPrimary } = chosen.mapping;
	const { rms, dc, peak, components, subgroups, firstPhases_deg } = means;
	const hasSignal = rms > 0 && !isSilent;
	return {
		name: source.channels[channelIndex]!.name,
		unit: quantity === 'voltage' ? 'V' : 'A',
		quantity,
		phase: chosen.phase,
		rms: rounded(rms),
		dc: roundedLevel(dc, rms),
		frequency_Hz: hasSignal ? rounded(findings.meanFrequency_Hz) : null,
		crestFactor: rounded(crestFactor(peak, rms)),
		...levelFields({
			quantity,
			rms,
			components,
			subgroups,
			phases_deg: firstPhases_deg.map((angle_deg, order) => wrapDegrees(angle_deg - order * reference_deg)),
			listed: Array.from({ length: findings.highestOrder }, (_, i) => i + 1),
			hasSignal
		}),
		use,
		toPrimary,
		mapping: chosen.reason
	};
}
