import { LINE_PHASES, type Phase } from '../../recording/phase';
import { ORDER_STRIDE } from '../intervals';
import { combinePhasors, type Phasor } from '../phasor';
import type { ChannelAnalysis } from '../waveform-analysis';

type LinePhase = (typeof LINE_PHASES)[number];

/** Fundamental of one channel over all windows with data, as the mean phasor; null when there is none. */
export function meanFundamental(channel: ChannelAnalysis): Phasor | null {
	const terms: { phasor: Phasor; factor: number }[] = [];
	for (let w = 0; w < channel.rms.length; w++) {
		const rms = channel.components[w * ORDER_STRIDE + 1]!;
		const phase_deg = channel.phases_deg[w * ORDER_STRIDE + 1]!;
		if (!Number.isNaN(rms) && !Number.isNaN(phase_deg)) terms.push({ phasor: { rms, phase_deg }, factor: 1 });
	}
	if (terms.length === 0) return null;
	const mean = combinePhasors(terms.map((t) => ({ ...t, factor: 1 / terms.length })));
	return mean.rms > 0 ? mean : null;
}

export function channelOf(
	channels: readonly ChannelAnalysis[],
	quantity: 'voltage' | 'current',
	phase: Phase
): ChannelAnalysis | null {
	return channels.find((c) => c.mapping.quantity === quantity && c.mapping.phase === phase) ?? null;
}

function phasorOf(
	channels: readonly ChannelAnalysis[],
	quantity: 'voltage' | 'current',
	phase: Phase
): Phasor | null {
	const channel = channelOf(channels, quantity, phase);
	return channel && meanFundamental(channel);
}

/**
 * Fundamental voltages to neutral. Where only the three line-to-line voltages are mapped, those of a zero-sequence-free
 * system are derived: U1 = (U12 − U31)/3 and so on round.
 */
export function phaseVoltages(channels: readonly ChannelAnalysis[]): Partial<Record<LinePhase, Phasor>> {
	const found: Partial<Record<LinePhase, Phasor>> = {};
	for (const phase of LINE_PHASES) {
		const phasor = phasorOf(channels, 'voltage', phase);
		if (phasor) found[phase] = phasor;
	}
	if (Object.keys(found).length > 0) return found;
	const u12 = phasorOf(channels, 'voltage', 'L1L2');
	const u23 = phasorOf(channels, 'voltage', 'L2L3');
	const u31 = phasorOf(channels, 'voltage', 'L3L1');
	if (!u12 || !u23 || !u31) return {};
	return {
		L1: thirdOfDifference(u12, u31),
		L2: thirdOfDifference(u23, u12),
		L3: thirdOfDifference(u31, u23)
	};
}

export function phaseCurrents(channels: readonly ChannelAnalysis[]): Partial<Record<LinePhase, Phasor>> {
	const found: Partial<Record<LinePhase, Phasor>> = {};
	for (const phase of LINE_PHASES) {
		const phasor = phasorOf(channels, 'current', phase);
		if (phasor) found[phase] = phasor;
	}
	return found;
}

function thirdOfDifference(a: Phasor, b: Phasor): Phasor {
	return combinePhasors([
		{ phasor: a, factor: 1 / 3 },
		{ phasor: b, factor: -1 / 3 }
	]);
}
