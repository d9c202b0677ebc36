import type { IntervalKind } from '$lib/harmonics/intervals';
import type { Phase } from '$lib/recording/phase';

/** Orders × time of one conductor, as the server sends it. */
export interface HeatmapFigures {
	interval: IntervalKind;
	kinds: IntervalKind[];
	phase: Phase;
	phases: { phase: Phase; label: string }[];
	scale: 'fundamental' | 'limit';
	hasLimits: boolean;
	orders: number[];
	intervalCount: number;
	intervalsPerCell: number;
	starts_ms: number[];
	end_ms: number;
	/** [orders][columns] percent; null = no figure. */
	cells: (number | null)[][];
	masked: boolean[];
	flaggedCount: number;
	start_ms: number;
}

export interface WorstCell {
	order: number;
	column: number;
	value: number;
}

/** The greatest cell of each order, the greatest orders first. */
export function worstCells({ orders, cells }: HeatmapFigures, most: number): WorstCell[] {
	return orders
		.flatMap((order, i): WorstCell[] => {
			let found: WorstCell | null = null;
			cells[i]!.forEach((value, column) => {
				if (value !== null && (found === null || value > found.value)) found = { order, column, value };
			});
			return found === null ? [] : [found];
		})
		.sort((a, b) => b.value - a.value)
		.slice(0, most);
}
