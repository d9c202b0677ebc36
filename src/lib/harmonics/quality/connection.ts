import { formatPhase, LINE_PHASES, type PhaseNames } from '../../recording/phase';
import { wrapDegrees, type Phasor } from '../phasor';
import { sequenceComponents } from '../sequence/sequence-components';
import type { ChannelAnalysis, QualityRemark } from '../waveform-analysis';
import { channelOf, phaseCurrents, phaseVoltages } from './fundamental-phasors';

/** A current may lie this far from its voltage and still be taken for rightly connected. */
const PLAUSIBLE_DEG = 65;

const ORDERINGS = [
	[0, 1, 2],
	[1, 0, 2],
	[0, 2, 1],
	[2, 1, 0],
	[1, 2, 0],
	[2, 0, 1]
] as const;

interface Reading {
	/** Position i is fed by the current now mapped to phase ordering[i]. */
	ordering: readonly number[];
	reversed: boolean[];
	worst_deg: number;
	changes: number;
}

/** Swapped or reversed current transformers, by the angle of each current to the voltage of its own phase. */
export function findConnectionFaults(
	channels: readonly ChannelAnalysis[],
	names: PhaseNames
): QualityRemark[] {
	const voltages = phaseVoltages(channels);
	const currents = phaseCurrents(channels);
	const phases = LINE_PHASES.filter((phase) => voltages[phase] && currents[phase]);
	if (phases.length === 0) return [];
	const u = phases.map((phase) => voltages[phase]!);
	const i = phases.map((phase) => currents[phase]!);
	const angles = u.map((voltage, at) => wrapDegrees(voltage.phase_deg - i[at]!.phase_deg));
	if (angles.every((angle) => Math.abs(angle) < 90)) return [];
	const best = bestReading(u, i);
	const listed = phases
		.map((phase, at) => `${formatPhase(phase, names)} ${angles[at]!.toFixed(0)}°`)
		.join(', ');
	const found = `Angle from voltage to current at the fundamental: ${listed}.`;
	if (!best || best.worst_deg > PLAUSIBLE_DEG)
		return [
			remark(
				'connection-doubtful',
				null,
				`${found} No exchange or reversal of the currents brings all of them within ${PLAUSIBLE_DEG}° of their voltages. Check which conductor each clamp is on, and its direction, before relying on powers.`
			)
		];
	if (best.ordering.some((from, at) => from !== at)) {
		const pairs = best.ordering
			.map((from, at) => ({ from, at }))
			.filter(({ from, at }) => from !== at)
			.map(({ from, at }) => `${formatPhase(phases[from]!, names)} is on ${formatPhase(phases[at]!, names)}`);
		return [
			remark(
				'swapped-ct',
				null,
				`${found} The currents fit when exchanged: what is mapped as ${pairs.join(', as ')}. Correct the mapping, or the clamps.`
			)
		];
	}
	const turned = phases.filter((_, at) => best.reversed[at]);
	if (turned.length === phases.length && phases.length > 1) {
		return [
			{
				...remark(
					'power-flows-out',
					null,
					`${found} Active power flows out of the installation on every phase: it feeds back, or all current transformers point the other way. Confirm which, and reverse the mapping in the second case.`
				),
				severity: 'warns'
			}
		];
	}
	return turned.map((phase) =>
		remark(
			'reversed-ct',
			channelOf(channels, 'current', phase)?.mapping.channelIndex ?? null,
			`${found} The current on ${formatPhase(phase, names)} runs against its voltage: its current transformer or clamp is reversed, or energy flows back on this phase. Turn it round, or mark the channel as reversed in the mapping.`
		)
	);
}

function bestReading(u: readonly Phasor[], i: readonly Phasor[]): Reading | null {
	let best: Reading | null = null;
	const orderings = u.length === 3 ? ORDERINGS : [u.map((_, at) => at)];
	for (const ordering of orderings) {
		for (let signs = 0; signs < 2 ** u.length; signs++) {
			const reading = judge(u, i, ordering, signs);
			if (reading.worst_deg > PLAUSIBLE_DEG) continue;
			if (
				!best ||
				reading.changes < best.changes ||
				(reading.changes === best.changes && reading.worst_deg < best.worst_deg)
			) {
				best = reading;
			}
		}
	}
	return best;
}

function judge(
	u: readonly Phasor[],
	i: readonly Phasor[],
	ordering: readonly number[],
	signs: number
): Reading {
	const reversed = u.map((_, at) => ((signs >> at) & 1) === 1);
	let worst_deg = 0;
	for (let at = 0; at < u.length; at++) {
		const turn = reversed[at] ? 180 : 0;
		const angle = wrapDegrees(u[at]!.phase_deg - i[ordering[at]!]!.phase_deg - turn);
		worst_deg = Math.max(worst_deg, Math.abs(angle));
	}
	const moved = ordering.filter((from, at) => from !== at).length;
	const turned = reversed.filter(Boolean).length;
	// All reversed together is one fact (the direction of the power), an exchange of two is one fact as well.
	const changes = (moved > 0 ? moved - 1 : 0) * 1.5 + (turned === u.length ? 1 : turned);
	return { ordering, reversed, worst_deg, changes };
}

/** Conductors that turn backwards: positive and negative sequence trade places. */
export function findNegativeRotation(
	channels: readonly ChannelAnalysis[],
	names: PhaseNames
): QualityRemark[] {
	const { L1, L2, L3 } = phaseVoltages(channels);
	if (!L1 || !L2 || !L3) return [];
	const { positive, negative } = sequenceComponents(L1, L2, L3);
	if (negative.rms <= positive.rms) return [];
	return [
		remark(
			'negative-rotation',
			null,
			`The voltages turn ${names.L1}–${names.L3}–${names.L2}: ${negative.rms.toPrecision(4)} V of negative against ` +
				`${positive.rms.toPrecision(4)} V of positive sequence. Two voltage leads are exchanged, or the site turns ` +
				`that way; correct the mapping, otherwise sequences are named the wrong way round.`
		)
	];
}

function remark(code: string, channelIndex: number | null, sentence: string): QualityRemark {
	return { severity: 'warns', code, channelIndex, sentence };
}
