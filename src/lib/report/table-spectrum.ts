import type { VerdictRow } from '../assessment/assessment';
import { BASIS_WORDS } from '../assessment/wording';
import type { LimitTable } from '../limits/limit-set';
import { PHASES } from '../recording/phase';
import { formatOrdinal } from '../units/format';
import type { ReportSpectrum } from './report-model';
import { statisticText } from './rule-words';

/** The rule whose values a chart shows: the one that compares with the table value itself, else what there is. */
function shownRule(rows: readonly VerdictRow[], table: LimitTable | undefined): string | null {
	const withValue = new Set(rows.filter((row) => row.value_pct !== null).map((row) => row.statisticKey));
	const rules = [...(table?.statistics ?? [])].sort((a, b) => a.multiplier - b.multiplier);
	return rules.find((rule) => withValue.has(rule.key))?.key ?? [...withValue][0] ?? null;
}

function joinNames(names: readonly string[]): string {
	return names.length < 2 ? (names[0] ?? '') : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`;
}

function finding(orders: readonly number[], quantity: 'voltage' | 'current', assessed: boolean): string {
	if (!assessed) return `Spectrum of ${quantity}`;
	if (orders.length === 0) return `No order of ${quantity} is over its limit`;
	if (orders.length === 1)
		return `The ${formatOrdinal(orders[0] ?? 0)} is the only order of ${quantity} over its limit`;
	if (orders.length > 6) return `${orders.length} orders of ${quantity} are over their limits`;
	return `The ${joinNames(orders.map(formatOrdinal))} of ${quantity} are over their limits`;
}

/**
 * Chart of one table: a value per order and phase under one rule, beside the limit of that rule.
 * rows     all rows of the table
 * returns  null when no order of it has a value
 */
export function tableSpectrum(
	rows: readonly VerdictRow[],
	table: LimitTable | undefined
): ReportSpectrum | null {
	const first = rows[0];
	const key = shownRule(
		rows.filter((row) => row.item.kind === 'order'),
		table
	);
	if (first === undefined || key === null) return null;
	const shown = rows.flatMap((row) =>
		row.item.kind === 'order' && row.statisticKey === key ? [{ order: row.item.order, row }] : []
	);
	const measured = shown.filter(({ row }) => row.value_pct !== null);
	const highest = Math.max(...measured.map(({ order }) => order));
	const orders = [...new Set(shown.map(({ order }) => order))]
		.filter((order) => order <= highest)
		.sort((a, b) => a - b);
	const present = new Set(shown.map(({ row }) => row.phase));
	const at = new Map(shown.map(({ order, row }) => [`${order}/${row.phase}`, row]));
	const over = orders.filter((order) =>
		shown.some((one) => one.order === order && one.row.verdict === 'exceeds')
	);
	return {
		tableKey: first.tableKey,
		quantity: first.quantity,
		title: finding(
			over,
			first.quantity,
			measured.some(({ row }) => row.verdict !== 'not-assessed')
		),
		note: `Percent ${BASIS_WORDS[first.basis]}, ${statisticText(table, key)}.`,
		orders,
		phases: PHASES.filter((phase) => present.has(phase)).map((phase) => ({
			phase,
			values_pct: orders.map((order) => at.get(`${order}/${phase}`)?.value_pct ?? null)
		})),
		limits_pct: orders.map((order) => shown.find((one) => one.order === order)?.row.limit_pct ?? null)
	};
}
