import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { tidyQuantity, tidyText } from '$lib/register/tidy-quantity';
import { parseQuantity } from '$lib/units/quantity-input';

describe('quantities shown back', () => {
	it.each([
		['voltage', '13.8kV', '13.8 kV'],
		['voltage', '13800', '13.8 kV'],
		['voltage', '480 v', '480 V'],
		['current', '1284', '1284 A'],
		['current', '31.4 kA', '31.4 kA'],
		['apparent-power', '1500', '1500 kVA'],
		['apparent-power', '1.5 MVA', '1500 kVA'],
		['apparent-power', '25 MVA', '25 MVA'],
		['fault-level', '250', '250 MVA'],
		['active-power', '640', '640 kW'],
		['percent', '5.75', '5.75 %'],
		['number', '0.92', '0.92']
	] as const)('%s typed as %s reads %s', (kind, typed, shown) => {
		expect(tidyText(kind, typed)).toBe(shown);
	});

	it('leaves what it cannot read as it was typed', () => {
		expect(tidyText('voltage', 'about 400')).toBe('about 400');
		expect(tidyText('voltage', '')).toBe('');
	});

	it('drops the binary tail of scaling', () => {
		// 0.1 + 0.2 is the usual example of a binary tail.
		expect(tidyQuantity('percent', 0.1 + 0.2)).toBe('0.3 %');
		expect(tidyQuantity('current', 1e-7)).toBe('0.0000001 A');
	});

	it('property: what a person types is shown back equal', () => {
		const kinds = fc.constantFrom(
			...(
				[
					['voltage', ['V', 'kV']],
					['current', ['A', 'kA']],
					['apparent-power', ['kVA', 'MVA']],
					['fault-level', ['MVA', 'kVA']],
					['active-power', ['kW', 'MW']],
					['percent', ['%']]
				] as const
			).flatMap(([kind, units]) => units.map((unit) => [kind, unit] as const))
		);
		fc.assert(
			fc.property(
				kinds,
				fc.integer({ min: 1, max: 999_999 }),
				fc.integer({ min: 0, max: 4 }),
				([kind, unit], digits, places) => {
					const typed = `${(digits / 10 ** places).toFixed(places)} ${unit}`;
					const before = parseQuantity(kind, typed);
					const shown = tidyText(kind, typed);
					const after = parseQuantity(kind, shown);
					if (!before.ok || !after.ok) throw new Error(`${typed} or ${shown} was not read`);
					// Twelve digits are shown; the binary value may differ in its last place.
					expect(Math.abs(after.value - before.value)).toBeLessThanOrEqual(1e-12 * before.value);
					expect(tidyText(kind, shown)).toBe(shown);
				}
			),
			{ seed: 20_260_321, numRuns: 1000 }
		);
	});
});
