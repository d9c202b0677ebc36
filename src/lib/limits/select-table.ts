import { describeRange, rangeContains } from './range';
import type { LimitSet, LimitTable } from './limit-set';

export interface TableSelection {
	table: LimitTable;
	/** Sentence: why this table. */
	why: string;
}

/** kV as printed in sentences: the shortest decimal that is the value itself. */
function kilovolts(nominalVoltage_kV: number): string {
	return `${nominalVoltage_kV} kV`;
}

/** Whether a table, or any row of a table with voltage classes, speaks about this voltage. */
function appliesAt(table: LimitTable, nominalVoltage_kV: number): boolean {
	if (table.nominalVoltage_kV !== null && !rangeContains(table.nominalVoltage_kV, nominalVoltage_kV))
		return false;
	return [...table.rows, ...table.totals].some(
		(row) => row.nominalVoltage_kV === null || rangeContains(row.nominalVoltage_kV, nominalVoltage_kV)
	);
}

function whyApplies(table: LimitTable, nominalVoltage_kV: number): string {
	const voltage = kilovolts(nominalVoltage_kV);
	if (table.nominalVoltage_kV !== null) {
		return `Nominal voltage ${voltage} lies in the table's band, ${describeRange(table.nominalVoltage_kV, 'kV')}.`;
	}
	const label = [...table.rows, ...table.totals].find(
		(row) => row.nominalVoltage_kV !== null && rangeContains(row.nominalVoltage_kV, nominalVoltage_kV)
	)?.nominalVoltage_kV?.label;
	return label === undefined
		? `The table applies at every voltage.`
		: `Nominal voltage ${voltage} lies in the class ${label}.`;
}

/**
 * Tables of a set that apply at a system voltage, in the set's own order, each with the reason.
 * nominalVoltage_kV  line-to-line at three-phase points, as standards state their bands
 * returns            empty when the set says nothing about this voltage
 */
export function selectTables(limitSet: LimitSet, nominalVoltage_kV: number): TableSelection[] {
	return limitSet.tables
		.filter((table) => appliesAt(table, nominalVoltage_kV))
		.map((table) => ({ table, why: whyApplies(table, nominalVoltage_kV) }));
}
