import { formatPhase, type Phase, type PhaseNames } from '../../recording/phase';
import type { SourceChannel } from '../../recording/sample-source';
import type { ChannelAnalysis, QualityRemark } from '../waveform-analysis';
import { meanFundamental } from './fundamental-phasors';
import { FAR_FROM_NOMINAL } from './levels';

const OTHER = { voltage: 'current', current: 'voltage' } as const;

/**
 * Channels mapped as the quantity that they are not: by the unit that the file gives them, or because what is mapped as
 * the current of a conductor lies at its nominal voltage while what is mapped as its voltage does not.
 */
export function findSwappedQuantities(
	sources: readonly SourceChannel[],
	channels: readonly ChannelAnalysis[],
	nominal_V: Partial<Record<Phase, number>>,
	names: PhaseNames
): QualityRemark[] {
	return channels.flatMap((channel) => {
		const { mapping, name } = channel;
		const source = sources[mapping.channelIndex]!;
		const stated = source.baseUnit === 'V' ? 'voltage' : source.baseUnit === 'A' ? 'current' : null;
		const place = `${name} is mapped as the ${mapping.quantity} of ${formatPhase(mapping.phase, names)}`;
		// A current sensor that gives volts is recorded in V: there the unit alone proves nothing.
		if (stated === 'current' && mapping.quantity === 'voltage')
			return [swapped(mapping.channelIndex, `${place}, but the file gives its unit as A.`)];
		if (mapping.quantity !== 'current') return [];
		const voltage = channels.find(
			({ mapping: other }) => other.quantity === 'voltage' && other.phase === mapping.phase
		);
		const nominal = nominal_V[mapping.phase];
		const [i, u] = [meanFundamental(channel)?.rms, voltage && meanFundamental(voltage)?.rms];
		if (!nominal || i === undefined || u === undefined || !voltage) return [];
		if (Math.abs(i / nominal - 1) > FAR_FROM_NOMINAL || Math.abs(u / nominal - 1) <= FAR_FROM_NOMINAL)
			return [];
		return [
			swapped(
				mapping.channelIndex,
				`${place} and carries ${i.toPrecision(4)}, which is its nominal ${OTHER[mapping.quantity]} of ` +
					`${nominal.toPrecision(4)} V, while ${voltage.name} carries ${u.toPrecision(4)}: the two are exchanged.`
			)
		];
	});
}

function swapped(channelIndex: number, sentence: string): QualityRemark {
	return { severity: 'blocks', code: 'quantity-swapped', channelIndex, sentence };
}
