import { formatNumber } from '../units/format';
import { rowCoversOrder } from './look-up-limit';
import type { LimitRow, LimitTable, LimitTotal, Provenance } from './limit-set';

export interface MatrixCell {
	/** Percent, or the formula as printed. */
	text: string;
	derived: boolean;
	/** Only where it differs from the table's. */
	provenance: Provenance | null;
}

/** A table laid out as it is printed: order groups down, classes across. */
export interface TableMatrix {
	/** What the classes are: null when the table has one column. */
	classHead: 'Short-circuit ratio' | 'Nominal voltage' | null;
	columns: string[];
	rows: { label: string; cells: (MatrixCell | null)[] }[];
	hasDerived: boolean;
}

function ordersOf(row: LimitRow, table: LimitTable): number[] {
	const found: number[] = [];
	for (let order = table.orderRange.from; order <= table.orderRange.to; order++)
		if (rowCoversOrder(row, order)) found.push(order);
	return found;
}

/** "5", "2, 4, 6", "11–16", "3–9, odd": the orders that a row really covers, shortest first. */
export function describeOrders(orders: number[]): string {
	const first = orders[0];
	const last = orders[orders.length - 1];
	if (first === undefined || last === undefined) return 'none';
	if (orders.length <= 3) return orders.join(', ');
	const step = (orders[1] ?? first) - first;
	const even = orders.every((order, i) => order === first + i * step);
	if (even && step === 1) return `${first}–${last}`;
	const parity = orders.every((order) => order % 2 === 1)
		? ', odd'
		: orders.every((order) => order % 2 === 0)
			? ', even'
			: '';
	const triplen = orders.every((order) => order % 3 === 0)
		? ', multiples of 3'
		: parity === ', odd' && orders.every((order) => order % 3 !== 0)
			? ', not multiples of 3'
			: '';
	return `${first}–${last}${parity}${triplen}`;
}

/** Formula in print: h stays h, the keyboard's signs become the printed ones. */
function printFormula(formula: string): string {
	return formula
		.replaceAll('**', '^')
		.replaceAll('*', ' × ')
		.replaceAll('-', ' − ')
		.replace(/\s+/g, ' ')
		.trim();
}

/** As many decimals as the printed value has, at least one. */
function printLimit(limit_pct: number): string {
	const decimals = Math.max(1, (String(limit_pct).split('.')[1] ?? '').length);
	return formatNumber(limit_pct, { decimals });
}

function columnOf(row: LimitRow | LimitTotal): string {
	return [row.nominalVoltage_kV?.label, row.shortCircuitRatio?.label].filter(Boolean).join(' · ');
}

function cellOf(row: LimitRow | LimitTotal, table: LimitTable): MatrixCell {
	const formula = 'formula' in row ? row.formula : null;
	return {
		text: row.limit_pct === null ? printFormula(formula ?? '') : printLimit(row.limit_pct),
		derived: 'origin' in row && row.origin === 'derived',
		provenance: row.provenance === table.provenance ? null : row.provenance
	};
}

/** Lays a limit table out for reading; rows in order of their first harmonic order, totals last. */
export function tableMatrix(table: LimitTable): TableMatrix {
	const everything = [...table.rows, ...table.totals];
	const columns = [...new Set(everything.map(columnOf))];
	const groups = new Map<string, { first: number; label: string; cells: (MatrixCell | null)[] }>();
	const put = (key: string, label: string, first: number, row: LimitRow | LimitTotal) => {
		const group = groups.get(key) ?? { first, label, cells: columns.map(() => null) };
		group.cells[columns.indexOf(columnOf(row))] = cellOf(row, table);
		groups.set(key, group);
	};
	for (const row of table.rows) {
		const orders = ordersOf(row, table);
		put(orders.join(), describeOrders(orders), orders[0] ?? 0, row);
	}
	for (const total of table.totals) {
		const { from, to } = total.ordersIncluded;
		put(total.index, `${total.index}, orders ${from}–${to}`, Infinity, total);
	}
	const head = everything.some((row) => row.shortCircuitRatio !== null)
		? 'Short-circuit ratio'
		: everything.some((row) => row.nominalVoltage_kV !== null)
			? 'Nominal voltage'
			: null;
	return {
		classHead: head,
		columns,
		rows: [...groups.values()]
			.sort((a, b) => a.first - b.first)
			.map(({ label, cells }) => ({ label, cells })),
		hasDerived: table.rows.some((row) => row.origin === 'derived')
	};
}
