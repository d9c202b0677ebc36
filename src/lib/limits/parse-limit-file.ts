import { z } from 'zod';
import { err, ok, type Result } from '../result';
import { compileLimitFormula } from './limit-formula';
import {
	limitFileSchema,
	rowSchema,
	type FileBounds,
	type FileRow,
	type FileStatistic,
	type FileTable,
	type FileTotal,
	type LimitFile
} from './limit-file-schema';
import type {
	Bound,
	LimitBasis,
	LimitRow,
	LimitSet,
	LimitTable,
	LimitTotal,
	Range,
	StatisticRule
} from './limit-set';

/** Highest order that the product measures and judges; an open upper order ends here. */
export const HIGHEST_JUDGED_ORDER = 50;

/** A table of the file that is not judged, and why; the library says so. */
export interface LeftOutTable {
	key: string;
	title: string;
	reason: string;
}

export interface ParsedLimitFile {
	/** Ids run from 1 in file order until the database gives its own. */
	limitSet: LimitSet;
	leftOut: LeftOutTable[];
}

export interface LimitFileProblem {
	/** File key as given. */
	file: string;
	/** A full sentence naming the place and what was expected there. */
	sentence: string;
}

function rangeOf(bounds: FileBounds): Range {
	if (typeof bounds.equals === 'number') {
		const exact: Bound = { value: bounds.equals, inclusive: true };
		return { lower: exact, upper: exact };
	}
	const lower = boundOf(bounds.from, true) ?? boundOf(bounds.above, false);
	const upper = boundOf(bounds.to, true) ?? boundOf(bounds.upTo, true) ?? boundOf(bounds.below, false);
	return { lower, upper };
}

function boundOf(value: number | null | undefined, inclusive: boolean): Bound | null {
	return typeof value === 'number' ? { value, inclusive } : null;
}

/** Quantity symbols are typeset on screen; in running text the trade's words stand instead. */
function inWords(text: string): string {
	return inPrint(text)
		.replaceAll('I_L, the maximum demand load current', 'the maximum demand load current')
		.replaceAll('I_L', 'the maximum demand load current')
		.replace(/^Isc\/IL/, 'Short-circuit ratio')
		.replaceAll('Isc/IL', 'short-circuit ratio');
}

/** Class labels in print: "V ≤ 1.0 kV" and not the keyboard's "<=". */
function inPrint(label: string): string {
	return label.replaceAll('<=', '≤').replaceAll('>=', '≥');
}

/** What 100 % means, read from the file's words; null when it is none of the three bases that are judged. */
function basisOf(table: FileTable): LimitBasis | null {
	const words = table.basis ?? '';
	if (table.quantity === 'current') return words.includes('I_L') ? 'demand-current' : null;
	if (/^percent of (the )?(rated \()?nominal/.test(words)) return 'nominal-voltage';
	return words.includes('fundamental') ? 'fundamental' : null;
}

/** Kinds whose cells are factors, procedures or type-test limits of equipment rather than levels at a point. */
const NOT_LEVELS = new Set(['factor', 'multiplier', 'rule', 'emission-limit']);

function reasonToLeaveOut(table: FileTable): string | null {
	if (NOT_LEVELS.has(table.kind)) return `its kind is “${table.kind}”, not a level at a point`;
	if (table.quantity !== 'voltage' && table.quantity !== 'current')
		return `it mixes quantities (“${table.quantity}”)`;
	if (table.unit !== 'percent') return `its values are in ${table.unit ?? 'no stated unit'}, not in percent`;
	if (basisOf(table) === null) return `its basis (“${table.basis ?? 'none'}”) is not one that is judged`;
	if ((table.rows ?? []).length === 0 && (table.total ?? []).length === 0) return 'it holds no value';
	return null;
}

function classesOf(row: FileRow | FileTotal): Pick<LimitRow, 'shortCircuitRatio' | 'nominalVoltage_kV'> {
	const voltage = row.nominalVoltage_kV;
	return {
		shortCircuitRatio:
			row.isc_il === undefined ? null : { ...rangeOf(row.isc_il), label: inPrint(row.isc_il_label ?? '') },
		nominalVoltage_kV:
			voltage === undefined
				? null
				: {
						...rangeOf(voltage),
						label:
							inPrint(row.label ?? '') || (typeof voltage.equals === 'number' ? `${voltage.equals} kV` : '')
					}
	};
}

function rowOf(row: FileRow, table: FileTable, id: number): LimitRow {
	const { list, parity, triplen, ...bounds } = row.orders;
	return {
		id,
		orders:
			list === undefined
				? { kind: 'range', range: rangeOf(bounds), parity, triplen }
				: { kind: 'list', list },
		...classesOf(row),
		limit_pct: row.limit_percent ?? null,
		formula: row.limit_percent_formula ?? null,
		origin: row.origin ?? 'printed',
		provenance: row.provenance ?? table.provenance
	};
}

function totalOf(total: FileTotal, table: FileTable, id: number): LimitTotal | null {
	if (total.index !== 'THD' && total.index !== 'TDD') return null;
	return {
		id,
		index: total.index,
		...classesOf(total),
		limit_pct: total.limit_percent,
		ordersIncluded: total.ordersIncluded ?? { from: 2, to: HIGHEST_JUDGED_ORDER },
		provenance: total.provenance ?? table.provenance
	};
}

/** The period in the two words that are judged. A "measurement period" of usually 24 h counts as a day. */
function periodOf(words: string): 'day' | 'week' | null {
	if (words.startsWith('week')) return 'week';
	return words.startsWith('day') || words.includes('24 h') ? 'day' : null;
}

function statisticOf(statistic: FileStatistic, table: FileTable, id: number): StatisticRule | null {
	const { intervalSeconds, percentile, multiplier, comparator } = statistic;
	const period = periodOf(statistic.period ?? '');
	if (intervalSeconds === undefined || percentile === undefined || period === null) return null;
	if (multiplier === undefined || comparator === undefined) return null;
	return {
		id,
		key: statistic.id,
		interval_s: intervalSeconds,
		percentile,
		period,
		multiplier,
		comparator,
		provenance: statistic.provenance ?? table.provenance
	};
}

function tableOf(table: FileTable, nextId: () => number): Result<LimitTable, string> {
	const rows: LimitRow[] = [];
	for (const [index, raw] of (table.rows ?? []).entries()) {
		const row = rowSchema.safeParse(raw);
		const where = `table ${table.id}, row ${index + 1}`;
		if (!row.success) return err(`${where}: ${z.prettifyError(row.error)}`);
		const formula = row.data.limit_percent_formula;
		if (formula !== undefined) {
			const compiled = compileLimitFormula(formula);
			if (!compiled.ok) return err(`${where}: ${compiled.problem}`);
		}
		rows.push(rowOf(row.data, table, nextId()));
	}
	const doubts = [...(table.doubts ?? [])];
	const statistics: StatisticRule[] = [];
	for (const entry of table.statistics ?? []) {
		const rule = statisticOf(entry, table, nextId());
		if (rule === null)
			doubts.push(`The rule ${entry.id} is not judged: its multiplier or period is not a single figure.`);
		else statistics.push(rule);
	}
	const band = table.appliesTo?.nominalVoltage_kV;
	return ok({
		id: nextId(),
		key: table.id,
		title: table.title,
		clause: table.clause ?? '',
		kind: table.kind,
		quantity: table.quantity === 'current' ? 'current' : 'voltage',
		basis: basisOf(table) ?? 'fundamental',
		basisText: inWords(table.basis ?? ''),
		nominalVoltage_kV: band === undefined || typeof band === 'string' ? null : rangeOf(band),
		orderRange: { from: table.orderRange?.from ?? 2, to: table.orderRange?.to ?? HIGHEST_JUDGED_ORDER },
		rows,
		totals: (table.total ?? [])
			.map((total) => totalOf(total, table, nextId()))
			.filter((total): total is LimitTotal => total !== null),
		statistics,
		provenance: table.provenance,
		sources: table.sources ?? [],
		doubts: doubts.map(inWords)
	});
}

function notesOf(file: LimitFile, leftOut: LeftOutTable[]): string[] {
	return [
		...(file.supersededBy === undefined ? [] : [`Superseded by ${file.supersededBy}.`]),
		...(file.notes ?? []),
		...(file.rules ?? []).map((rule) => rule.text),
		...leftOut.map((table) => `“${table.title}” is kept in the data file but not judged: ${table.reason}.`),
		...(file.doubts ?? []).map((doubt) => `Doubt: ${doubt}`)
	].map(inWords);
}

/**
 * Reads one data file of the schema `harmonic-limits/1` into the domain's limit set.
 * key   stable name of the edition, the file's name without ending, e.g. "ieee-519-2022"
 * data  parsed JSON
 * Tables whose cells are not percentages at a point (factors, amperes, type-test limits) are left out and listed.
 */
export function parseLimitFile(key: string, data: unknown): Result<ParsedLimitFile, LimitFileProblem> {
	const file = limitFileSchema.safeParse(data);
	if (!file.success) {
		return err({
			file: key,
			sentence: `The limit file “${key}” is not valid: ${z.prettifyError(file.error)}`
		});
	}
	let id = 0;
	const nextId = () => ++id;
	const tables: LimitTable[] = [];
	const leftOut: LeftOutTable[] = [];
	for (const table of file.data.tables) {
		const reason = reasonToLeaveOut(table);
		if (reason !== null) {
			leftOut.push({ key: table.id, title: table.title, reason });
			continue;
		}
		const parsed = tableOf(table, nextId);
		if (!parsed.ok)
			return err({ file: key, sentence: `The limit file “${key}” is not valid: ${parsed.problem}` });
		tables.push(parsed.value);
	}
	const { standard, edition, title, publisher, jurisdiction, status } = file.data;
	return ok({
		limitSet: {
			id: nextId(),
			key,
			standard,
			edition,
			title,
			publisher,
			jurisdiction,
			status,
			practiceId: null,
			notes: notesOf(file.data, leftOut),
			tables
		},
		leftOut
	});
}
