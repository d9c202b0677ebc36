import { describe, expect, it } from 'vitest';
import { lookUpLimit } from '$lib/limits/look-up-limit';
import { limitTable } from '../limits/load-limit-files';

/**
 * EN 50160 low voltage, percent of the fundamental, orders 2 to 25. Source of 2010: public Polish station-design
 * data quoting PN-EN 50160 Table 1 and open data tables of a power-grid data-set generator; the latter notes the
 * change of orders 15 and 21 made by A2:2019 and kept in 2022.
 */
const LV_2010: Record<number, number> = {
	...{ 2: 2, 3: 5, 4: 1, 5: 6, 6: 0.5, 7: 5, 8: 0.5, 9: 1.5, 10: 0.5, 11: 3.5, 12: 0.5, 13: 3, 14: 0.5 },
	...{ 15: 0.5, 16: 0.5, 17: 2, 18: 0.5, 19: 1.5, 20: 0.5, 21: 0.5, 22: 0.5, 23: 1.5, 24: 0.5, 25: 1.5 }
};
const LV_2022: Record<number, number> = { ...LV_2010, 15: 1, 21: 0.75 };

describe.each([
	['en-50160-2010', LV_2010],
	['en-50160-2022', LV_2022]
])('%s, low voltage', (edition, printed) => {
	const table = limitTable(edition, 'lv-harmonics');

	it.each(Object.entries(printed))('order %s: %d %%', (order, expected) => {
		const found = lookUpLimit(table, {
			item: { kind: 'order', order: Number(order) },
			nominalVoltage_kV: 0.4,
			shortCircuitRatio: null
		});
		expect(found.ok && found.value.limit_pct).toBe(expected);
	});

	it('holds THD to 8 % over orders 2 to 40, ninety-five percent of the week, the bound itself allowed', () => {
		expect(table.totals.map((total) => [total.limit_pct, total.ordersIncluded])).toEqual([
			[8, { from: 2, to: 40 }]
		]);
		expect(table.statistics.map((rule) => [rule.percentile, rule.period, rule.comparator])).toEqual([
			[95, 'week', '<=']
		]);
	});
});
