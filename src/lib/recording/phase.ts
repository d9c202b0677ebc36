/**
 * Conductors and conductor pairs, by canonical key. What a point calls them on screen (A B C, R S T, …)
 * is the point's own affair; see PhaseNames.
 */
export const PHASES = ['L1', 'L2', 'L3', 'N', 'L1L2', 'L2L3', 'L3L1'] as const;
export type Phase = (typeof PHASES)[number];

export const LINE_PHASES = ['L1', 'L2', 'L3'] as const;
export const LINE_TO_LINE_PHASES = ['L1L2', 'L2L3', 'L3L1'] as const;

/** Names of the three line conductors and the neutral at one point, e.g. A, B, C, N. */
export interface PhaseNames {
	L1: string;
	L2: string;
	L3: string;
	N: string;
}

export const DEFAULT_PHASE_NAMES: PhaseNames = { L1: 'L1', L2: 'L2', L3: 'L3', N: 'N' };

/** formatPhase('L1L2', {L1:'A',L2:'B',…}) → "A–B". */
export function formatPhase(phase: Phase, names: PhaseNames): string {
	switch (phase) {
		case 'L1L2':
			return `${names.L1}–${names.L2}`;
		case 'L2L3':
			return `${names.L2}–${names.L3}`;
		case 'L3L1':
			return `${names.L3}–${names.L1}`;
		default:
			return names[phase];
	}
}
