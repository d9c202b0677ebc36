import { describe, expect, it } from 'vitest';
import { lookUpLimit, type LimitItem } from '$lib/limits/look-up-limit';
import { limitTable } from '../limits/load-limit-files';

/**
 * IEEE Std 519, Tables 2 to 4 as printed (editions 2014 and 2022 have the same figures), typed here a second
 * time. Columns: h below 11, 11…16, 17…22, 23…34, 35…50, TDD. Sources: a public grid-study guide quoting Tables 1
 * and 2 of the 2022 edition; a public reprint of Table 10.3 of 1992 (Power Quality in Electrical Systems,
 * McGraw-Hill 2007, fig. 2.3), whose figures are those of Table 2; Table 3 is half of Table 2; Table 4 partly
 * single-source. Only the odd orders stand in the printed columns.
 */
const TABLE_2: [number, number[]][] = [
	[10, [4, 2, 1.5, 0.6, 0.3, 5]],
	[35, [7, 3.5, 2.5, 1, 0.5, 8]],
	[75, [10, 4.5, 4, 1.5, 0.7, 12]],
	[500, [12, 5.5, 5, 2, 1, 15]],
	[2000, [15, 7, 6, 2.5, 1.4, 20]]
];
const TABLE_3 = TABLE_2.map(([ratio, row]): [number, number[]] => [ratio, row.map((cell) => cell / 2)]);
const TABLE_4: [number, number[]][] = [
	[10, [1, 0.5, 0.38, 0.15, 0.1, 1.5]],
	[35, [2, 1, 0.75, 0.3, 0.15, 2.5]],
	[75, [3, 1.5, 1.15, 0.45, 0.22, 3.75]]
];

const COLUMN_ORDERS = [
	[3, 5, 7, 9],
	[11, 13, 15],
	[17, 19, 21],
	[23, 25, 27, 29, 31, 33],
	[35, 37, 39, 41, 43, 45, 47, 49]
];

describe.each(['ieee-519-2022', 'ieee-519-2014'])('%s', (edition) => {
	describe.each([
		['table-2', 13.8, TABLE_2],
		['table-3', 115, TABLE_3],
		['table-4', 345, TABLE_4]
	] as const)('%s', (key, kV, printed) => {
		const table = limitTable(edition, key);
		const at = (item: LimitItem, ratio: number) => {
			const found = lookUpLimit(table, { item, nominalVoltage_kV: kV, shortCircuitRatio: ratio });
			return found.ok ? found.value.limit_pct : null;
		};

		it.each(printed)('ratio %d', (ratio, cells) => {
			for (const [column, orders] of COLUMN_ORDERS.entries()) {
				for (const order of orders) expect(at({ kind: 'order', order }, ratio)).toBe(cells[column]);
			}
			expect(at({ kind: 'total', index: 'TDD' }, ratio)).toBe(cells[5]);
		});

		it('has a value for every order from 2 to 50 and for none beyond', () => {
			for (let order = 2; order <= 50; order += 1) expect(at({ kind: 'order', order }, 35)).not.toBeNull();
			expect(at({ kind: 'order', order: 51 }, 35)).toBeNull();
			expect(at({ kind: 'order', order: 1 }, 35)).toBeNull();
		});

		// IEEE Std 519-2014, 5.2 (public study notes quoting the clause); for 2022 from memory.
		it('has the three percentile rules of current, all strict', () => {
			const rules = table.statistics.map((rule) => [
				rule.interval_s,
				rule.percentile,
				rule.period,
				rule.multiplier,
				rule.comparator
			]);
			expect(rules).toEqual([
				[3, 99, 'day', 2, '<'],
				[600, 99, 'week', 1.5, '<'],
				[600, 95, 'week', 1, '<']
			]);
		});
	});

	// IEEE Std 519-2014, 5.1 (public extract of the clause).
	it('has the two percentile rules of voltage', () => {
		const rules = limitTable(edition, 'table-1').statistics;
		expect(rules.map((rule) => [rule.interval_s, rule.percentile, rule.period, rule.multiplier])).toEqual([
			[3, 99, 'day', 1.5],
			[600, 95, 'week', 1]
		]);
	});
});
