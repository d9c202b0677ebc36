import type { LimitSet } from '../limits/limit-set';
import { rangeContains } from '../limits/range';
import { selectTables } from '../limits/select-table';

/**
 * Printed label of the I_sc/I_L class that a ratio falls in, as in the limit set's current table for this voltage.
 * returns  null when the set has no such classes, or none holds the ratio
 */
export function ratioClassLabel(limitSet: LimitSet, nominalVoltage_V: number, ratio: number): string | null {
	for (const { table } of selectTables(limitSet, nominalVoltage_V / 1000)) {
		if (table.quantity !== 'current') continue;
		const row = [...table.rows, ...table.totals].find(
			({ shortCircuitRatio }) => shortCircuitRatio !== null && rangeContains(shortCircuitRatio, ratio)
		);
		if (row?.shortCircuitRatio) return row.shortCircuitRatio.label;
	}
	return null;
}
