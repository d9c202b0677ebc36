import { err, ok, type Result } from '../result';
import { decimalsBeside } from '../units/format-beside';
import { compileLimitFormula } from './limit-formula';
import { rangeContains } from './range';
import type { LimitRow, LimitTable, LimitTotal, Provenance, Range } from './limit-set';

export type LimitItem = { kind: 'order'; order: number } | { kind: 'total'; index: 'THD' | 'TDD' };

export interface LimitQuestion {
	item: LimitItem;
	nominalVoltage_kV: number;
	/** Short-circuit current ÷ demand current; null when either is not known. */
	shortCircuitRatio: number | null;
}

export interface LimitAnswer {
	/** Percent of the table's basis, before any rule's multiplier. */
	limit_pct: number;
	/** Id of the row or total that holds it. */
	rowId: number;
	provenance: Provenance;
	/** Sentence: which class of the table the point falls in; empty when the table has one class only. */
	why: string;
}

export type LimitProblem =
	/** The table needs the ratio and it is not known. */
	| { code: 'short-circuit-ratio-missing'; sentence: string }
	/** The table states no value for this order or index: nothing to judge. */
	| { code: 'no-value'; sentence: string };

/** Whether a row speaks about an order: list, or range with parity and multiples of three. */
export function rowCoversOrder(row: LimitRow, order: number): boolean {
	const { orders } = row;
	if (orders.kind === 'list') return orders.list.includes(order);
	const isTriplen = order % 3 === 0;
	return (
		rangeContains(orders.range, order) &&
		(orders.parity === 'all' || (orders.parity === 'even') === (order % 2 === 0)) &&
		(orders.triplen === 'any' || (orders.triplen === 'only') === isTriplen)
	);
}

/** "31.2", with as many decimals as keep the ratio apart from the bounds of its class. */
export function formatRatio(ratio: number, classRange: Range): string {
	const bounds = [classRange.lower, classRange.upper].filter((bound) => bound !== null);
	const decimals = bounds.reduce((most, bound) => Math.max(most, decimalsBeside(ratio, bound.value, 1)), 1);
	return ratio.toFixed(decimals);
}

function itemName(item: LimitItem): string {
	return item.kind === 'order' ? `order ${item.order}` : item.index;
}

function candidates(table: LimitTable, item: LimitItem): (LimitRow | LimitTotal)[] {
	if (item.kind === 'total') return table.totals.filter((total) => total.index === item.index);
	const { from, to } = table.orderRange;
	if (item.order < from || item.order > to) return [];
	return table.rows.filter((row) => rowCoversOrder(row, item.order));
}

function limitOf(row: LimitRow | LimitTotal, item: LimitItem): number {
	if (row.limit_pct !== null) return row.limit_pct;
	const formula = 'formula' in row ? row.formula : null;
	const compiled = formula === null ? null : compileLimitFormula(formula);
	// Formulas are checked when a file is read; one that fails here was not written by this product.
	if (compiled === null || !compiled.ok || item.kind !== 'order')
		throw new Error(`limit row ${row.id} has neither a value nor a usable formula`);
	return compiled.value.evaluate(item.order);
}

function whyThisRow(row: LimitRow | LimitTotal, ratio: number | null): string {
	if (row.shortCircuitRatio === null || ratio === null) return '';
	const { label } = row.shortCircuitRatio;
	return `Short-circuit ratio ${formatRatio(ratio, row.shortCircuitRatio)} lies in the class ${label}.`;
}

/**
 * The limit of one order or total in one table, chosen by voltage class, short-circuit ratio, order, parity and
 * multiples of three. Where rows overlap (no published table here does) the stricter one is taken.
 */
export function lookUpLimit(table: LimitTable, question: LimitQuestion): Result<LimitAnswer, LimitProblem> {
	const { item, nominalVoltage_kV, shortCircuitRatio } = question;
	const atVoltage = candidates(table, item).filter(
		(row) => row.nominalVoltage_kV === null || rangeContains(row.nominalVoltage_kV, nominalVoltage_kV)
	);
	if (shortCircuitRatio === null && atVoltage.some((row) => row.shortCircuitRatio !== null)) {
		return err({
			code: 'short-circuit-ratio-missing',
			sentence:
				`“${table.title}” chooses its row by the ratio of short-circuit current to demand current. ` +
				'Enter both at the point.'
		});
	}
	const matching = atVoltage
		.filter(
			(row) =>
				row.shortCircuitRatio === null ||
				(shortCircuitRatio !== null && rangeContains(row.shortCircuitRatio, shortCircuitRatio))
		)
		.map((row) => ({ row, limit_pct: limitOf(row, item) }))
		.sort((a, b) => a.limit_pct - b.limit_pct);
	const strictest = matching[0];
	if (strictest === undefined) {
		return err({ code: 'no-value', sentence: `“${table.title}” states no value for ${itemName(item)}.` });
	}
	return ok({
		limit_pct: strictest.limit_pct,
		rowId: strictest.row.id,
		provenance: strictest.row.provenance,
		why: whyThisRow(strictest.row, shortCircuitRatio)
	});
}
