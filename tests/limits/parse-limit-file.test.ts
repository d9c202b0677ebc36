import { describe, expect, it } from 'vitest';
import { parseLimitFile } from '$lib/limits/parse-limit-file';
import { lookUpLimit, rowCoversOrder } from '$lib/limits/look-up-limit';
import { rangeContains } from '$lib/limits/range';
import type { LimitTable } from '$lib/limits/limit-set';
import { LIMIT_FILE_KEYS, limitFileJson, limitSet, parsedLimitFile } from './load-limit-files';

interface RawTable {
	id: string;
	rows?: { orders?: unknown; worked?: { h: number; limit_percent?: number }[] }[];
	gaps?: { orders: unknown }[];
}
const rawTables = (key: string) => (limitFileJson(key) as { tables: RawTable[] }).tables;

describe.each(LIMIT_FILE_KEYS)('%s', (key) => {
	it('is read whole, and says which tables are not judged', () => {
		const { limitSet: set, leftOut } = parsedLimitFile(key);
		expect(set.tables.length).toBeGreaterThan(0);
		const kept = [...set.tables.map((table) => table.key), ...leftOut.map((table) => table.key)];
		expect(kept.sort()).toEqual(
			rawTables(key)
				.map((table) => table.id)
				.sort()
		);
		for (const table of leftOut) expect(set.notes.some((note) => note.includes(table.title))).toBe(true);
	});

	it('never shows a raw quantity symbol', () => {
		const { tables, notes } = limitSet(key);
		const texts = [...notes, ...tables.flatMap((table) => [table.basisText, ...table.doubts])];
		for (const text of texts) expect(text).not.toMatch(/I_L|I_sc|Isc\/IL/);
	});

	it('computes the worked values that the file states for its formulas', () => {
		for (const raw of rawTables(key)) {
			const table = limitSet(key).tables.find((candidate) => candidate.key === raw.id);
			if (table === undefined) continue;
			for (const { h, limit_percent } of (raw.rows ?? []).flatMap((row) => row.worked ?? [])) {
				if (limit_percent === undefined) continue;
				const found = lookUpLimit(table, {
					item: { kind: 'order', order: h },
					nominalVoltage_kV: table.nominalVoltage_kV?.upper?.value ?? 100,
					shortCircuitRatio: null
				});
				// The files round their worked values to four decimals.
				expect(found.ok && Math.abs(found.value.limit_pct - limit_percent)).toBeLessThanOrEqual(5.1e-5);
			}
		}
	});

	it('gives each order at most one row in every class', () => {
		for (const table of limitSet(key).tables) {
			for (const ratio of RATIOS)
				for (const voltage_kV of VOLTAGES_KV) oneRowAtMost(table, ratio, voltage_kV);
		}
	});
});

const RATIOS = [5, 19.999, 20, 25, 49.999, 50, 99, 100, 1000, 1000.001];
const VOLTAGES_KV = [0.12, 0.38, 0.4, 0.48, 1, 6, 6.6, 10, 11, 20, 35, 36, 66, 69, 110, 150, 161, 275, 400];

function oneRowAtMost(table: LimitTable, ratio: number, voltage_kV: number): void {
	for (let order = table.orderRange.from; order <= table.orderRange.to; order += 1) {
		const rows = table.rows.filter(
			(row) =>
				rowCoversOrder(row, order) &&
				(row.shortCircuitRatio === null || rangeContains(row.shortCircuitRatio, ratio)) &&
				(row.nominalVoltage_kV === null || rangeContains(row.nominalVoltage_kV, voltage_kV))
		);
		expect(rows.length, `${table.key} order ${order} ratio ${ratio} ${voltage_kV} kV`).toBeLessThanOrEqual(1);
	}
}

describe('refusals', () => {
	const minimal = (row: unknown) => ({
		schema: 'harmonic-limits/1',
		standard: 'Utility contract',
		edition: '1',
		title: 't',
		publisher: 'p',
		jurisdiction: 'j',
		status: 's',
		tables: [
			{
				id: 'only',
				title: 'Only table',
				kind: 'limit',
				quantity: 'voltage',
				unit: 'percent',
				basis: 'percent of the fundamental voltage',
				provenance: 'single-source',
				rows: [row]
			}
		]
	});
	const orders = { from: 2, to: 50, parity: 'all', triplen: 'any' };

	it.each([
		['an unknown schema', { ...minimal({ orders, limit_percent: 5 }), schema: 'something/9' }, 'schema'],
		['a row without a value', minimal({ orders }), 'table only, row 1'],
		['a row with two values', minimal({ orders, limit_percent: 5, limit_percent_formula: '5' }), 'not both'],
		['a formula that assigns', minimal({ orders, limit_percent_formula: 'h = 3' }), 'refused'],
		['a formula that calls', minimal({ orders, limit_percent_formula: 'import(h)' }), 'refused'],
		['a formula of another variable', minimal({ orders, limit_percent_formula: '25/n' }), 'not known'],
		['a formula that is none', minimal({ orders, limit_percent_formula: '25/' }), 'cannot be read'],
		['something else', 'text', 'not valid']
	])('%s', (_what, data, part) => {
		const parsed = parseLimitFile('contract', data);
		expect(parsed.ok).toBe(false);
		if (!parsed.ok) expect(parsed.problem.sentence).toContain(part);
	});

	it('but reads a power and unary signs', () => {
		const parsed = parseLimitFile('contract', minimal({ orders, limit_percent_formula: '-2 + h**2 / (+4)' }));
		if (!parsed.ok) throw new Error(parsed.problem.sentence);
		const table = parsed.value.limitSet.tables[0];
		const found =
			table &&
			lookUpLimit(table, {
				item: { kind: 'order', order: 10 },
				nominalVoltage_kV: 0.4,
				shortCircuitRatio: null
			});
		expect(found?.ok && found.value.limit_pct).toBe(23);
	});
});

describe('what the files say becomes the domain', () => {
	it('keeps each bound as the file marks it', () => {
		const table = limitSet('ieee-519-2022').tables.find((candidate) => candidate.key === 'table-2');
		expect(table?.nominalVoltage_kV).toEqual({
			lower: { value: 0.12, inclusive: true },
			upper: { value: 69, inclusive: true }
		});
		expect(table?.totals.map((total) => total.shortCircuitRatio)).toEqual([
			{ lower: { value: 0, inclusive: true }, upper: { value: 20, inclusive: false }, label: '< 20' },
			{ lower: { value: 20, inclusive: true }, upper: { value: 50, inclusive: false }, label: '20 < 50' },
			{ lower: { value: 50, inclusive: true }, upper: { value: 100, inclusive: false }, label: '50 < 100' },
			{
				lower: { value: 100, inclusive: true },
				upper: { value: 1000, inclusive: true },
				label: '100 < 1000'
			},
			{ lower: { value: 1000, inclusive: false }, upper: null, label: '> 1000' }
		]);
	});

	it('takes nominal, fundamental and demand current from the words of each table', () => {
		const basis = (key: string) => limitSet(key).tables.map((table) => [table.key, table.basis]);
		expect(basis('ieee-519-2022')).toEqual([
			['table-1', 'nominal-voltage'],
			['table-2', 'demand-current'],
			['table-3', 'demand-current'],
			['table-4', 'demand-current']
		]);
		expect(new Set(basis('en-50160-2022').map(([, is]) => is))).toEqual(new Set(['fundamental']));
	});

	it('says which rule it cannot judge rather than bending it', () => {
		const mv = limitSet('iec-tr-61000-3-6-2008').tables[0];
		expect(mv?.statistics.map((rule) => rule.key)).toEqual(['V-week-95']);
		expect(mv?.doubts.some((doubt) => doubt.includes('V-day-99'))).toBe(true);
	});
});
