import type { VerdictRow } from '../assessment/assessment';
import { governingRow } from '../assessment/roll-up';
import { formatOrdinal } from '../units/format';

export type VerdictItem = VerdictRow['item'];

export function itemKey(item: VerdictItem): string {
	return item.kind === 'order' ? String(item.order) : item.index;
}

/** "5th" or "TDD", as a list of what lies over its limit names them. */
export function itemShort(item: VerdictItem): string {
	return item.kind === 'order' ? formatOrdinal(item.order) : item.index;
}

/** "5th harmonic", "total demand distortion". */
export function itemLong(item: VerdictItem): string {
	if (item.kind === 'order') return `${formatOrdinal(item.order)} harmonic`;
	return item.index === 'TDD' ? 'total demand distortion' : 'total harmonic distortion';
}

/** Totals last, orders ascending. */
function compareItems(a: VerdictItem, b: VerdictItem): number {
	if (a.kind === 'order' && b.kind === 'order') return a.order - b.order;
	if (a.kind === b.kind) return itemKey(a).localeCompare(itemKey(b));
	return a.kind === 'order' ? -1 : 1;
}

export function groupByItem<R extends Pick<VerdictRow, 'item'>>(
	rows: readonly R[]
): { item: VerdictItem; rows: R[] }[] {
	const groups = new Map<string, { item: VerdictItem; rows: R[] }>();
	for (const row of rows) {
		const key = itemKey(row.item);
		const group = groups.get(key);
		if (group === undefined) groups.set(key, { item: row.item, rows: [row] });
		else group.rows.push(row);
	}
	return [...groups.values()].sort((a, b) => compareItems(a.item, b.item));
}

/** The row that speaks for several: the governing one, or the first where none was assessed. */
export function speakingRow<R extends VerdictRow>(rows: readonly R[]): R | null {
	const governing = governingRow(rows);
	return rows.find((row) => row === governing) ?? rows[0] ?? null;
}

/** One row for each order and total of a table: that of the phase and rule that govern. */
export function worstByItem<R extends VerdictRow>(rows: readonly R[]): R[] {
	return groupByItem(rows).flatMap((group) => speakingRow(group.rows) ?? []);
}

/** Worth a line of its own: a total, not plainly compliant, or over a tenth of its limit. */
export function isNotableLevel(
	isTotal: boolean,
	verdict: VerdictRow['verdict'],
	utilisation: number | null
): boolean {
	return isTotal || verdict !== 'compliant' || (utilisation !== null && utilisation > 0.1);
}

export function isNotable(row: Pick<VerdictRow, 'item' | 'verdict' | 'utilisation'>): boolean {
	return isNotableLevel(row.item.kind === 'total', row.verdict, row.utilisation);
}

/** Orders and totals over their limit, by name, each once: ["5th", "TDD"]. */
export function overLimit(rows: readonly VerdictRow[]): string[] {
	const over = rows.filter(
		(row) => row.verdict === 'exceeds' || row.verdict === 'exceeds-inside-uncertainty'
	);
	return groupByItem(over).map((group) => itemShort(group.item));
}
