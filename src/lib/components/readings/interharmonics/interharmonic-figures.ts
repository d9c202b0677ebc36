import type { Phase } from '$lib/recording/phase';

type Figure = number | null;

export interface PhaseLevelFigures {
	phase: Phase;
	label: string;
	fundamental: Figure;
	subgroups: Figure[];
	groups: Figure[];
	interharmonicSubgroups: Figure[];
	interharmonicGroups: Figure[];
}

export interface InterharmonicFigures {
	quantity: 'voltage' | 'current';
	unit: 'V' | 'A';
	highestOrder: number;
	lineSpacing_Hz: number;
	phases: PhaseLevelFigures[];
	above: {
		window: number;
		highestOrder: number;
		orders: { phase: Phase; label: string; rms: Figure[] }[];
		bands: { centres_Hz: number[]; phases: { phase: Phase; label: string; rms: Figure[] }[] };
	} | null;
}

/** Which joining of lines is shown. */
export type Grouping = 'subgroups' | 'groups';

/** Harmonic and interharmonic row of one phase under a grouping. */
export function rowsOf(phase: PhaseLevelFigures, grouping: Grouping) {
	return grouping === 'subgroups'
		? { harmonic: phase.subgroups, between: phase.interharmonicSubgroups }
		: { harmonic: phase.groups, between: phase.interharmonicGroups };
}

/** Percent of the fundamental; null where either is missing. */
export function shareOf(value: Figure | undefined, fundamental: Figure): Figure {
	return value === null || value === undefined || !fundamental ? null : (100 * value) / fundamental;
}
