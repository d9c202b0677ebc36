import type { VerdictRow } from '../assessment/assessment';
import { describeRange } from '../limits/range';
import type { LimitRow, LimitSet, LimitTable, LimitTotal, Provenance } from '../limits/limit-set';

/** A limit row as it is named in print: what it covers, its printed value, where that comes from. */
export interface LimitRowWords {
	id: number;
	tableKey: string;
	table: string;
	clause: string;
	what: string;
	limit_pct: number | null;
	provenance: Provenance;
	/** Where the table was found. */
	sources: string[];
}

function orderWords(orders: LimitRow['orders']): string {
	if (orders.kind === 'list')
		return orders.list.length === 1 ? `order ${orders.list[0]}` : `orders ${orders.list.join(', ')}`;
	const parity = orders.parity === 'all' ? '' : `${orders.parity} `;
	const triplen = { any: '', only: ', multiples of three', exclude: ', without multiples of three' }[
		orders.triplen
	];
	return `${parity}orders ${describeRange(orders.range)}${triplen}`;
}

function classWords(row: LimitRow | LimitTotal): string {
	return [
		row.shortCircuitRatio === null ? '' : `I_sc/I_L ${row.shortCircuitRatio.label}`,
		row.nominalVoltage_kV === null ? '' : row.nominalVoltage_kV.label
	]
		.filter((part) => part !== '')
		.join('; ');
}

/** The row or total behind a verdict row. Rows and totals are numbered apart: the item tells which is meant. */
export function limitRowWords(
	table: LimitTable | undefined,
	row: Pick<VerdictRow, 'item' | 'limitRowId'>
): LimitRowWords | null {
	if (table === undefined) return null;
	const found =
		row.item.kind === 'order'
			? table.rows.find((candidate) => candidate.id === row.limitRowId)
			: table.totals.find((candidate) => candidate.id === row.limitRowId);
	if (found === undefined) return null;
	const covers = 'orders' in found ? orderWords(found.orders) : found.index;
	return {
		id: found.id,
		tableKey: table.key,
		table: table.title,
		clause: table.clause,
		what: [covers, classWords(found)].filter((part) => part !== '').join('; '),
		limit_pct: found.limit_pct,
		provenance: found.provenance,
		sources: table.sources
	};
}

/** Every limit row that an assessment used, each once, in the set's own order. */
export function usedLimitRows(limitSet: LimitSet, rows: readonly VerdictRow[]): LimitRowWords[] {
	const used = new Map<string, LimitRowWords>();
	for (const table of limitSet.tables)
		for (const row of rows.filter((candidate) => candidate.tableKey === table.key)) {
			const words = limitRowWords(table, row);
			if (words !== null) used.set(`${table.key}/${row.item.kind}/${words.id}`, words);
		}
	return [...used.values()];
}
