import {
	familyContent,
	partialOddCurrent,
	pwhd_pctOfFundamental,
	thd_pctOfFundamental
} from '../../../harmonics/distortion';
import { ORDER_STRIDE } from '../../../harmonics/intervals';
import type { Phase } from '../../../recording/phase';
import { ordersOver, rmsOver } from '../../analysis/window-values';
import type { AnalysisSeriesRow } from '../../db/rows';
import { figure, type Figure } from './reading-figure';

/** Totals of one phase over the chosen windows, each by its own rule. Percent of the fundamental where not said. */
export interface DistortionTotals {
	phase: Phase;
	label: string;
	/** Of single lines, orders 2 to 40 and 2 to 50. */
	thd40_pct: Figure;
	thd50_pct: Figure;
	/** Of subgroups, and of groups (null where the analysis has none). */
	thds_pct: Figure;
	thdg_pct: Figure;
	/** Orders 14 to 40, weighted by the order. */
	pwhd_pct: Figure;
	odd_pct: Figure;
	even_pct: Figure;
	triplen_pct: Figure;
	/** Odd orders 21 to 39, A; currents only. */
	partialOdd_A: Figure;
}

/** rows  windows of one quantity */
export function distortionTotals(
	rows: readonly AnalysisSeriesRow[],
	windows: readonly number[],
	highestOrder: number,
	label: (phase: Phase) => string
): DistortionTotals[] {
	return rows.map((row) => {
		const over = (levels: Buffer | null) => levels && ordersOver(row, levels, windows);
		const rms = rmsOver(row, windows);
		const lines = over(row.components) ?? new Float64Array(ORDER_STRIDE).fill(NaN);
		const subgroups = ordersOver(row, row.subgroups, windows);
		const groups = over(row.harmonic_groups);
		const family = (name: 'odd' | 'even' | 'triplen') =>
			figure((100 * familyContent(subgroups, name, highestOrder)) / subgroups[1]!);
		return {
			phase: row.phase,
			label: label(row.phase),
			thd40_pct: figure(thd_pctOfFundamental(lines, rms, 40)),
			thd50_pct: figure(thd_pctOfFundamental(lines, rms, 50)),
			thds_pct: figure(thd_pctOfFundamental(subgroups, rms, highestOrder)),
			thdg_pct: groups ? figure(thd_pctOfFundamental(groups, rms, 40)) : null,
			pwhd_pct: figure(pwhd_pctOfFundamental(lines)),
			odd_pct: family('odd'),
			even_pct: family('even'),
			triplen_pct: family('triplen'),
			partialOdd_A: row.quantity === 'current' ? figure(partialOddCurrent(lines)) : null
		};
	});
}
