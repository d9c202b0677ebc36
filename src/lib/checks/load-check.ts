import { formatPhase } from '../recording/phase';
import { formatCurrent } from '../units/format';
import type { CaptureCheck } from './capture-check';
import type { CaptureSubject, CheckedPoint } from './capture-subject';

/**
 * A current above this multiple of the maximum demand current cannot be: I_L is the greatest 15- or 30-minute demand of a
 * year (IEEE Std 519-2022, definitions; from memory), and half as much again leaves room for a short peak.
 */
export const MOST_OF_DEMAND = 1.5;
/** Below this share of I_L an installation is as good as idle, or a ratio is missing (common practice). */
export const LEAST_OF_DEMAND = 0.02;

const TITLE = 'Current against demand current';

/** Currents against I_L of the point: a missing or doubled ratio shows as a current that the point cannot carry. */
export function checkLoad({ evidence }: CaptureSubject, point: CheckedPoint): CaptureCheck {
	const base = { code: 'current-far-from-demand', title: TITLE, channelIndex: null, evidence: null };
	const currents = (evidence?.channels ?? []).filter(
		(channel) => channel.quantity === 'current' && channel.phase !== 'N' && channel.rms !== null
	);
	const demand_A = point.demandCurrent_A;
	if (currents.length === 0)
		return { ...base, outcome: 'not-checked', sentence: 'No current of a line is known.', advice: '' };
	if (demand_A === null || !(demand_A > 0))
		return {
			...base,
			outcome: 'not-checked',
			sentence: 'The maximum demand current I_L of the point is not known.',
			advice: 'Enter it on the point’s page: harmonic currents are judged in percent of it.'
		};
	const bars = currents.map(({ phase, rms }) => ({
		label: `I ${formatPhase(phase, point.phaseNames)}`,
		measured: rms!,
		expected: demand_A,
		low: LEAST_OF_DEMAND * demand_A,
		high: MOST_OF_DEMAND * demand_A
	}));
	const picture = { ...base, evidence: { kind: 'levels' as const, axis: 'Current, A rms', bars } };
	const high = bars.filter(({ measured }) => measured > MOST_OF_DEMAND * demand_A);
	const low = bars.filter(({ measured }) => measured < LEAST_OF_DEMAND * demand_A);
	const told = (some: typeof bars) =>
		some.map(({ label, measured }) => `${label} ${formatCurrent(measured)}`).join(', ');
	const beside = `the maximum demand current I_L of ${formatCurrent(demand_A)}`;
	if (high.length > 0)
		return {
			...picture,
			outcome: 'warns',
			sentence: `${told(high)}: more than ${MOST_OF_DEMAND} times ${beside}.`,
			advice:
				'Check the ratio of the current transformers in the mapping, and the demand current of the point: one of the two is wrong.'
		};
	if (low.length === bars.length)
		return {
			...picture,
			outcome: 'warns',
			sentence: `${told(low)}: less than ${100 * LEAST_OF_DEMAND} % of ${beside}.`,
			advice:
				'Check whether a transformer ratio is missing in the mapping, or whether the plant stood still: a verdict on an idle plant says little.'
		};
	return { ...picture, outcome: 'passes', sentence: `${told(bars)} beside ${beside}.`, advice: '' };
}
