import { formatPhase, type PhaseNames } from '../../recording/phase';
import { rootMeanSquare } from '../../numerics/stats/root-mean-square';
import type { ChannelAnalysis, QualityRemark } from '../waveform-analysis';

/** A channel this much weaker than the strongest of its kind carries nothing worth a verdict. */
export const DEAD_SHARE = 1e-3;

/**
 * Channels without signal beside others of the same quantity that have one. A voltage without signal would read as one
 * without harmonics, so it blocks; a conductor may well carry no current.
 */
export function findDeadChannels(channels: readonly ChannelAnalysis[], names: PhaseNames): QualityRemark[] {
	const remarks: QualityRemark[] = [];
	for (const channel of channels) {
		const level = level_rms(channel);
		if (Number.isNaN(level)) continue;
		const strongest = Math.max(
			...channels
				.filter((c) => c.mapping.quantity === channel.mapping.quantity)
				.map(level_rms)
				.filter((v) => !Number.isNaN(v))
		);
		if (level > DEAD_SHARE * strongest) continue;
		const isNeutral = channel.mapping.phase === 'N';
		if (isNeutral && level > 0) continue;
		remarks.push({
			severity: isNeutral ? 'notes' : channel.mapping.quantity === 'voltage' ? 'blocks' : 'warns',
			code: 'dead-channel',
			channelIndex: channel.mapping.channelIndex,
			sentence:
				`${channel.name} (${formatPhase(channel.mapping.phase, names)}) carries no signal: ` +
				`${Number(level.toPrecision(3))} ${channel.unit} rms beside ` +
				`${Number(strongest.toPrecision(3))} ${channel.unit} on the strongest channel. ` +
				`Check lead, clamp and mapping, or take the channel out of the mapping.`
		});
	}
	return remarks;
}

/** Rms without dc over the windows that have data. */
function level_rms(channel: ChannelAnalysis): number {
	const alternating = channel.rms
		.map((rms, w) => Math.sqrt(Math.max(0, rms ** 2 - channel.dc[w]! ** 2)))
		.filter((v) => !Number.isNaN(v));
	return rootMeanSquare(alternating);
}
