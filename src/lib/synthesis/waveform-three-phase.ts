import type { Phase } from '../recording/phase';
import type { ChannelTruth, HarmonicTruth } from './waveform';

export interface ThreePhaseTruth {
	/** Line-to-neutral fundamental, V rms. */
	voltage_V: number;
	voltageHarmonics: HarmonicTruth[];
	/** Fundamental of the line currents, A rms. */
	current_A: number;
	currentHarmonics: HarmonicTruth[];
	/** Current behind voltage at the fundamental, degrees. */
	lag_deg: number;
	/** Factors on L1, L2, L3; 1 when left out. */
	voltageFactors?: [number, number, number];
	currentFactors?: [number, number, number];
	/** Adds the neutral current: the sum of the three. */
	withNeutral?: boolean;
	noise_pctOfFundamental?: number;
}

const LINES: readonly { phase: Phase; shift_deg: number }[] = [
	{ phase: 'L1', shift_deg: 0 },
	{ phase: 'L2', shift_deg: -120 },
	{ phase: 'L3', shift_deg: 120 }
];

/** Channels U1, U2, U3, I1, I2, I3 (and IN) of a three-phase point; each phase repeats the wave of the first a third of a cycle later. */
export function threePhaseChannels(truth: ThreePhaseTruth): ChannelTruth[] {
	const noise = truth.noise_pctOfFundamental;
	const shared = noise === undefined ? {} : { noise_pctOfFundamental: noise };
	const voltages = LINES.map(({ phase, shift_deg }, i): ChannelTruth => ({
		...shared,
		name: `U${i + 1}`,
		quantity: 'voltage',
		phase,
		fundamental_rms: truth.voltage_V * (truth.voltageFactors?.[i] ?? 1),
		fundamentalPhase_deg: shift_deg,
		harmonics: truth.voltageHarmonics
	}));
	const currents = LINES.map(({ phase, shift_deg }, i): ChannelTruth => ({
		...shared,
		name: `I${i + 1}`,
		quantity: 'current',
		phase,
		fundamental_rms: truth.current_A * (truth.currentFactors?.[i] ?? 1),
		fundamentalPhase_deg: shift_deg - truth.lag_deg,
		harmonics: truth.currentHarmonics
	}));
	return truth.withNeutral
		? [...voltages, ...currents, neutralOf(currents, truth)]
		: [...voltages, ...currents];
}

function neutralOf(currents: readonly ChannelTruth[], truth: ThreePhaseTruth): ChannelTruth {
	const orders = [1, ...truth.currentHarmonics.map((h) => h.order)];
	const sums = orders.map((order) => sumOfOrder(currents, order));
	const first = sums[0]!;
	// The truth of a channel is stated on its fundamental; a balanced neutral has none, so a thousandth of the phase's stands in.
	const base = Math.max(first.rms, truth.current_A / 1000);
	return {
		name: 'IN',
		quantity: 'current',
		phase: 'N',
		fundamental_rms: base,
		fundamentalPhase_deg: first.phase_deg,
		harmonics: sums.slice(1).map((sum, i) => ({
			order: orders[i + 1]!,
			magnitude_pctOfFundamental: (100 * sum.rms) / base,
			phase_deg: sum.phase_deg - orders[i + 1]! * first.phase_deg
		}))
	};
}

function sumOfOrder(channels: readonly ChannelTruth[], order: number): { rms: number; phase_deg: number } {
	let re = 0;
	let im = 0;
	for (const channel of channels) {
		const harmonic = order === 1 ? null : channel.harmonics.find((h) => h.order === order)!;
		const rms = channel.fundamental_rms * (harmonic ? harmonic.magnitude_pctOfFundamental / 100 : 1);
		const angle =
			((order * channel.fundamentalPhase_deg + (harmonic ? harmonic.phase_deg : 0)) * Math.PI) / 180;
		re += rms * Math.cos(angle);
		im += rms * Math.sin(angle);
	}
	return { rms: Math.hypot(re, im), phase_deg: (Math.atan2(im, re) * 180) / Math.PI };
}
