import { formatPhase, type PhaseNames } from '../../recording/phase';
import { ORDER_STRIDE } from '../intervals';
import type { ChannelAnalysis, QualityRemark } from '../waveform-analysis';

/**
 * Two channels whose difference is smaller than this share of either carry one signal: two inputs of one recorder on one
 * wire differ by their gain errors of some tenths of a percent, two conductors of one supply by 120° (common practice).
 */
export const SAME_SIGNAL_SHARE = 0.005;

/** Channels of one quantity, mapped to different conductors, that carry the same wave: one of them is connected twice. */
export function findSameSignals(channels: readonly ChannelAnalysis[], names: PhaseNames): QualityRemark[] {
	const remarks: QualityRemark[] = [];
	const lines = channels.filter(({ mapping }) => mapping.phase !== 'N');
	lines.forEach((one, at) => {
		const match = lines.slice(0, at).find((other) => isSame(one, other));
		if (!match) return;
		remarks.push({
			severity: 'blocks',
			code: 'same-signal',
			channelIndex: one.mapping.channelIndex,
			sentence:
				`${one.name} (${formatPhase(one.mapping.phase, names)}) carries the same wave as ${match.name} ` +
				`(${formatPhase(match.mapping.phase, names)}), to within ${(100 * SAME_SIGNAL_SHARE).toFixed(1)} %: one ` +
				`conductor was recorded twice, and the other not at all.`
		});
	});
	return remarks;
}

/** rms of the difference of the fundamental and all harmonics, against the rms of the signals themselves. */
function isSame(a: ChannelAnalysis, b: ChannelAnalysis): boolean {
	if (a.mapping.quantity !== b.mapping.quantity || a.mapping.phase === b.mapping.phase) return false;
	let difference = 0;
	let size = 0;
	for (let order = 1; order < ORDER_STRIDE; order++) {
		const [u, v] = [a.components[order]!, b.components[order]!];
		if (Number.isNaN(u) || Number.isNaN(v)) continue;
		const angle = ((a.phases_deg[order]! - b.phases_deg[order]!) * Math.PI) / 180;
		difference += u * u + v * v - 2 * u * v * (Number.isNaN(angle) ? 1 : Math.cos(angle));
		size += Math.max(u * u, v * v);
	}
	return size > 0 && Math.sqrt(Math.max(0, difference)) <= SAME_SIGNAL_SHARE * Math.sqrt(size);
}
