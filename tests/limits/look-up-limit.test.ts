import { describe, expect, it } from 'vitest';
import { lookUpLimit, type LimitItem } from '$lib/limits/look-up-limit';
import { selectTables } from '$lib/limits/select-table';
import { limitSet, limitTable } from './load-limit-files';

const order = (h: number): LimitItem => ({ kind: 'order', order: h });

function limit(set: string, table: string, item: LimitItem, kV: number, ratio: number | null): number {
	const found = lookUpLimit(limitTable(set, table), {
		item,
		nominalVoltage_kV: kV,
		shortCircuitRatio: ratio
	});
	if (!found.ok) throw new Error(found.problem.sentence);
	return found.value.limit_pct;
}

// Bounds: IEEE Std 519-2022, 5.1 to 5.4 (voltage classes and tables), read through public quotations.
describe('voltage bands of IEEE Std 519-2022, both sides of every bound', () => {
	const keys = (kV: number) =>
		selectTables(limitSet('ieee-519-2022'), kV).map((selected) => selected.table.key);
	it.each([
		[0.119, ['table-1']],
		[0.12, ['table-1', 'table-2']],
		[1, ['table-1', 'table-2']],
		[69, ['table-1', 'table-2']],
		[69.001, ['table-1', 'table-3']],
		[161, ['table-1', 'table-3']],
		[161.001, ['table-1', 'table-4']],
		[500, ['table-1', 'table-4']]
	])('%d kV', (kV, expected) => {
		expect(keys(kV)).toEqual(expected);
	});

	it.each([
		[1, 5, 8],
		[1.001, 3, 5],
		[69, 3, 5],
		[69.001, 1.5, 2.5],
		[161, 1.5, 2.5],
		[161.001, 1, 1.5]
	])('voltage limits at %d kV are %d %% and %d %% THD', (kV, individual, thd) => {
		expect(limit('ieee-519-2022', 'table-1', order(5), kV, null)).toBe(individual);
		expect(limit('ieee-519-2022', 'table-1', { kind: 'total', index: 'THD' }, kV, null)).toBe(thd);
	});
});

describe('short-circuit classes, both sides of every bound', () => {
	it.each([
		['table-2', 13.8, 19.999, 4, 5],
		['table-2', 13.8, 20, 7, 8],
		['table-2', 13.8, 49.999, 7, 8],
		['table-2', 13.8, 50, 10, 12],
		['table-2', 13.8, 99.999, 10, 12],
		['table-2', 13.8, 100, 12, 15],
		['table-2', 13.8, 1000, 12, 15],
		['table-2', 13.8, 1000.001, 15, 20],
		['table-3', 115, 19.999, 2, 2.5],
		['table-3', 115, 20, 3.5, 4],
		['table-3', 115, 50, 5, 6],
		['table-3', 115, 100, 6, 7.5],
		['table-3', 115, 1000.001, 7.5, 10],
		['table-4', 230, 24.999, 1, 1.5],
		['table-4', 230, 25, 2, 2.5],
		['table-4', 230, 49.999, 2, 2.5],
		['table-4', 230, 50, 3, 3.75],
		['table-4', 230, 5000, 3, 3.75]
	])('%s at %d kV and ratio %d', (table, kV, ratio, fifth, tdd) => {
		expect(limit('ieee-519-2022', table, order(5), kV, ratio)).toBe(fifth);
		expect(limit('ieee-519-2022', table, { kind: 'total', index: 'TDD' }, kV, ratio)).toBe(tdd);
	});

	it('prints the ratio so that it lies in the class it is said to lie in', () => {
		const table = limitTable('ieee-519-2022', 'table-2');
		const why = (ratio: number) => {
			const found = lookUpLimit(table, { item: order(5), nominalVoltage_kV: 0.48, shortCircuitRatio: ratio });
			return found.ok ? found.value.why : found.problem.sentence;
		};
		expect(why(31.2)).toBe('Short-circuit ratio 31.2 lies in the class 20 < 50.');
		expect(why(49.996)).toBe('Short-circuit ratio 49.996 lies in the class 20 < 50.');
		expect(why(50)).toBe('Short-circuit ratio 50.0 lies in the class 50 < 100.');
	});

	it('names what is needed when the ratio is not known', () => {
		const found = lookUpLimit(limitTable('ieee-519-2022', 'table-2'), {
			item: order(5),
			nominalVoltage_kV: 0.48,
			shortCircuitRatio: null
		});
		expect(found.ok).toBe(false);
		if (!found.ok) {
			expect(found.problem.code).toBe('short-circuit-ratio-missing');
			expect(found.problem.sentence).toContain('Enter both');
		}
	});
});

describe('even orders', () => {
	// IEEE Std 519-2014, footnote a of tables 2 to 4: 25 % of the odd limits for every even order.
	it.each([
		[2, 1.75],
		[4, 1.75],
		[8, 1.75],
		[12, 0.875],
		[50, 0.125]
	])('2014: order %d is held to %d %%', (h, expected) => {
		expect(limit('ieee-519-2014', 'table-2', order(h), 0.48, 30)).toBeCloseTo(expected, 12);
	});

	// IEEE Std 519-2022, footnote a: 50 % up to order 6, the table value above (public summary of the edition).
	it.each([
		[2, 3.5],
		[6, 3.5],
		[8, 7],
		[10, 7],
		[12, 3.5],
		[50, 0.5]
	])('2022: order %d is held to %d %%', (h, expected) => {
		expect(limit('ieee-519-2022', 'table-2', order(h), 0.48, 30)).toBe(expected);
	});
});

describe('EN 50160', () => {
	it.each([
		[0.4, 'lv-harmonics'],
		[1, 'lv-harmonics'],
		[1.001, 'mv-harmonics'],
		[36, 'mv-harmonics'],
		[36.001, 'hv-harmonics'],
		[150, 'hv-harmonics']
	])('%d kV is in %s', (kV, key) => {
		expect(selectTables(limitSet('en-50160-2022'), kV).map((selected) => selected.table.key)).toEqual([key]);
	});

	it('says nothing above 150 kV, above order 25, and at the orders it leaves open', () => {
		expect(selectTables(limitSet('en-50160-2022'), 150.001)).toEqual([]);
		for (const [table, kV, h] of [
			['lv-harmonics', 0.4, 26],
			['hv-harmonics', 110, 17]
		] as const) {
			const question = { item: order(h), nominalVoltage_kV: kV, shortCircuitRatio: null };
			const found = lookUpLimit(limitTable('en-50160-2022', table), question);
			expect(!found.ok && found.problem.code).toBe('no-value');
		}
	});

	it('gives each table its reason in words', () => {
		const why = (key: string, kV: number) => selectTables(limitSet(key), kV).map((selected) => selected.why);
		expect(why('en-50160-2022', 0.4)).toEqual([
			"Nominal voltage 0.4 kV lies in the table's band, up to and including 1 kV."
		]);
		expect(why('ieee-519-2022', 13.8)[0]).toBe('Nominal voltage 13.8 kV lies in the class 1 kV < V ≤ 69 kV.');
	});
});
