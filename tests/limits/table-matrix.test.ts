import { describe, expect, it } from 'vitest';
import { describeOrders, tableMatrix } from '$lib/limits/table-matrix';
import { LIMIT_FILE_KEYS, limitSet, limitTable } from './load-limit-files';

describe('a table as it is printed', () => {
	it('has orders down and short-circuit classes across', () => {
		const matrix = tableMatrix(limitTable('ieee-519-2022', 'table-2'));
		expect(matrix.classHead).toBe('Short-circuit ratio');
		expect(matrix.columns).toEqual(['< 20', '20 < 50', '50 < 100', '100 < 1000', '> 1000']);
		const texts = (label: string) =>
			matrix.rows.find((row) => row.label === label)?.cells.map((cell) => cell?.text);
		expect(texts('3–9, odd')).toEqual(['4.0', '7.0', '10.0', '12.0', '15.0']);
		expect(texts('2, 4, 6')).toEqual(['2.0', '3.5', '5.0', '6.0', '7.5']);
		expect(texts('TDD, orders 2–50')).toEqual(['5.0', '8.0', '12.0', '15.0', '20.0']);
		expect(matrix.rows.at(-1)?.label).toBe('TDD, orders 2–50');
		expect(matrix.hasDerived).toBe(true);
	});

	it('has voltage classes across in the voltage table, and one column where there are none', () => {
		expect(tableMatrix(limitTable('ieee-519-2022', 'table-1')).columns).toEqual([
			'V ≤ 1.0 kV',
			'1 kV < V ≤ 69 kV',
			'69 kV < V ≤ 161 kV',
			'161 kV < V'
		]);
		const single = tableMatrix(limitTable('en-50160-2022', 'lv-harmonics'));
		expect(single.classHead).toBeNull();
		expect(single.columns).toEqual(['']);
		expect(single.rows[0]).toEqual({
			label: '2',
			cells: [{ text: '2.0', derived: false, provenance: null }]
		});
	});

	it('prints formulas with printed signs', () => {
		const matrix = tableMatrix(limitTable('iec-61000-2-2-2002', 'table-1'));
		const row = matrix.rows.find((candidate) => candidate.label === '17–49, odd, not multiples of 3');
		expect(row?.cells[0]?.text).toBe('2.27 × (17/h) − 0.27');
	});

	it.each(LIMIT_FILE_KEYS)('%s: loses no row and no total', (key) => {
		for (const table of limitSet(key).tables) {
			const cells = tableMatrix(table).rows.flatMap((row) => row.cells.filter((cell) => cell !== null));
			expect(cells.length).toBe(table.rows.length + table.totals.length);
			expect(cells.every((cell) => cell.text !== '')).toBe(true);
		}
	});
});

it('describes orders by what they have in common', () => {
	expect(describeOrders([5])).toBe('5');
	expect(describeOrders([6, 8, 10, 12])).toBe('6–12, even');
	expect(describeOrders([2, 3, 4, 5])).toBe('2–5');
	expect(describeOrders([27, 33, 39, 45])).toBe('27–45, odd, multiples of 3');
	expect(describeOrders([])).toBe('none');
});
