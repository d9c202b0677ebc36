import type { LimitSet } from '../limits/limit-set';
import { rangeContains } from '../limits/range';
import { selectTables } from '../limits/select-table';
import { formatNumber } from '../units/format';
import { decimalsBeside } from '../units/format-beside';

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

/**
 * I_sc/I_L with one decimal, or as many more as keep it apart from a whole number it is not: class bounds are whole
 * numbers, and 19.98 must not read as 20.0 beside a class that ends below 20.
 */
export function formatShortCircuitRatio(ratio: number): string {
	return formatNumber(ratio, { decimals: decimalsBeside(ratio, Math.round(ratio), 1) });
}
