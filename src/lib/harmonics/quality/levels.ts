import { formatPhase, type Phase, type PhaseNames } from '../../recording/phase';
import type { SourceChannel } from '../../recording/sample-source';
import type { ChannelAnalysis, QualityRemark } from '../waveform-analysis';
import { meanFundamental } from './fundamental-phasors';

/** Voltages further than this from nominal point to a ratio, not to the network. */
export const FAR_FROM_NOMINAL = 0.2;
/** A constant part that offsets of good inputs stay below, share of the rms (common practice). */
export const DC_SHARE = { voltage: 0.01, current: 0.03 };

/** Voltages whose fundamental is nowhere near the point's nominal voltage. */
export function findImplausibleVoltages(
	sources: readonly SourceChannel[],
	channels: readonly ChannelAnalysis[],
	nominal_V: Partial<Record<Phase, number>>,
	names: PhaseNames
): QualityRemark[] {
	const remarks: QualityRemark[] = [];
	for (const channel of channels) {
		const expected_V = nominal_V[channel.mapping.phase];
		const fundamental = meanFundamental(channel);
		if (channel.mapping.quantity !== 'voltage' || !expected_V || !fundamental) continue;
		const share = fundamental.rms / expected_V;
		if (Math.abs(share - 1) <= FAR_FROM_NOMINAL) continue;
		remarks.push({
			severity: 'blocks',
			code: 'voltage-far-from-nominal',
			channelIndex: channel.mapping.channelIndex,
			sentence:
				`${channel.name}: the fundamental is ${fundamental.rms.toPrecision(4)} V, ` +
				`${(100 * share).toFixed(1)} % of the nominal ${expected_V.toPrecision(4)} V of ` +
				`${formatPhase(channel.mapping.phase, names)}. ${likelyCause(sources[channel.mapping.channelIndex]!, share)}`
		});
	}
	return remarks;
}

function likelyCause(source: SourceChannel, share: number): string {
	const root3 = Math.sqrt(3);
	if (near(share, root3) || near(share, 1 / root3)) {
		return 'The factor is √3: a line-to-line voltage is mapped as line-to-neutral or the other way round. Correct the phase in the mapping.';
	}
	if (source.ratio && source.ratio.secondary !== 0) {
		const ratio = source.ratio.primary / source.ratio.secondary;
		if (near(share * ratio, 1) || near(share / ratio, 1)) {
			return `The factor is the transformer ratio of the file (${source.ratio.primary} : ${source.ratio.secondary}): it is missing, or applied twice. Correct the ratio in the mapping.`;
		}
	}
	return 'Check the transformer ratio, the unit and the nominal voltage of the point.';
}

function near(value: number, target: number): boolean {
	return Math.abs(value / target - 1) < 0.08;
}

/** Channels with a constant part that a transformer could not have carried. */
export function findDcOffsets(channels: readonly ChannelAnalysis[]): QualityRemark[] {
	const remarks: QualityRemark[] = [];
	for (const channel of channels) {
		let dc = 0;
		let square = 0;
		let count = 0;
		for (let w = 0; w < channel.rms.length; w++) {
			if (Number.isNaN(channel.rms[w])) continue;
			dc += channel.dc[w]!;
			square += channel.rms[w]! ** 2;
			count++;
		}
		if (count === 0) continue;
		dc /= count;
		const rms = Math.sqrt(square / count);
		if (!(Math.abs(dc) > DC_SHARE[channel.mapping.quantity] * rms) || channel.mapping.phase === 'N') continue;
		remarks.push({
			severity: Math.abs(dc) > 0.1 * rms ? 'warns' : 'notes',
			code: 'dc-offset',
			channelIndex: channel.mapping.channelIndex,
			sentence:
				`${channel.name}: a constant part of ${dc.toPrecision(3)} ${channel.unit}, ` +
				`${((100 * Math.abs(dc)) / rms).toFixed(1)} % of its rms. It stands as order 0 and enters the rms, no harmonic ` +
				`order. Check the zero of the input or clamp; behind an instrument transformer it cannot come from the network.`
		});
	}
	return remarks;
}
