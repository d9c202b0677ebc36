import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import {
	optionalQuantitySchema,
	parseQuantity,
	quantitySchema,
	type QuantityKind
} from '$lib/units/quantity-input';

function value(kind: QuantityKind, text: string, decimal: '.' | ',' = '.'): number {
	const parsed = parseQuantity(kind, text, { decimal });
	if (!parsed.ok) throw new Error(parsed.problem);
	return parsed.value;
}

// Spellings: common practice on nameplates and bills in point and comma countries.
describe('what people type', () => {
	it.each<[QuantityKind, string, number]>([
		['voltage', '13.8 kV', 13_800],
		['voltage', '13,8 kV', 13_800],
		['voltage', '13.8kV', 13_800],
		['voltage', '480', 480],
		['voltage', '480 v', 480],
		['voltage', '13.8 KV', 13_800],
		['voltage', '0,480 kV', 480],
		['current', '1 284 A', 1284],
		['current', '1,284 A', 1284],
		['current', '1\u202f284 A', 1284],
		['current', "1'284", 1284],
		['current', '1.284 A', 1.284],
		['current', '1,284.5 A', 1284.5],
		['current', '1.284,5 A', 1284.5],
		['current', '31.378 kA', 31_378],
		['apparent-power', '1500 kVA', 1_500_000],
		['apparent-power', '1500 kva', 1_500_000],
		['apparent-power', '1.5 MVA', 1_500_000],
		['apparent-power', '1500', 1_500_000],
		['fault-level', '250', 250e6],
		['active-power', '640 kW', 640_000],
		['percent', '5.75 %', 5.75],
		['percent', '5,75%', 5.75],
		['percent', '5.75', 5.75],
		['duration', '10 min', 600],
		['impedance', '15 mΩ', 0.015],
		['number', '0,92', 0.92],
		['number', '-2.5e-3', -0.0025]
	])('%s: “%s” is %d in base units', (kind, text, expected) => {
		expect(value(kind, text)).toBeCloseTo(expected, 9);
	});

	it('takes a lone comma as decimal where the locale does', () => {
		expect(value('current', '1,284 A', ',')).toBe(1.284);
		expect(value('current', '1.284 A', ',')).toBe(1284);
	});
});

describe('refusals say what to enter', () => {
	it.each<[QuantityKind, string]>([
		['voltage', ''],
		['voltage', 'thirteen kV'],
		['voltage', '480 A'],
		['voltage', '1.2.3'],
		['current', '12 84 A'],
		['current', '12,84,5'],
		['percent', '5 kV'],
		['apparent-power', '1500 kW']
	])('%s: “%s”', (kind, text) => {
		const parsed = parseQuantity(kind, text);
		expect(parsed.ok).toBe(false);
		if (!parsed.ok) expect(parsed.problem).toMatch(/[Ee]nter .+\.$/);
	});

	it('never guesses between milli and mega', () => {
		expect(value('voltage', '5 mV')).toBe(0.005);
		expect(value('voltage', '5 MV')).toBe(5e6);
	});
});

describe('form schemas', () => {
	it('carry the sentence of the refusal', () => {
		const outcome = quantitySchema('voltage').safeParse('480 A');
		expect(outcome.success).toBe(false);
		expect(outcome.error?.issues[0]?.message).toContain('“A” is not a unit of voltage');
	});

	it('refuse zero and what lies above the allowed', () => {
		expect(quantitySchema('percent', { atMost: 30 }).safeParse('0').success).toBe(false);
		expect(quantitySchema('percent', { atMost: 30 }).safeParse('31 %').success).toBe(false);
		expect(quantitySchema('percent', { atMost: 30 }).parse('30 %')).toBe(30);
	});

	it('reads an empty optional field as not known, never as zero', () => {
		const schema = z.object({ current: optionalQuantitySchema('current') });
		expect(schema.parse({ current: '  ' })).toEqual({ current: null });
		expect(schema.parse({ current: '12 A' })).toEqual({ current: 12 });
		const refused = schema.safeParse({ current: '12 V' });
		expect(refused.success).toBe(false);
	});
});

it('reads back every number that is printed with a unit', () => {
	fc.assert(
		fc.property(fc.double({ min: 0.001, max: 1e6, noNaN: true }), (x) => {
			expect(value('voltage', `${x} V`)).toBe(x);
			expect(value('voltage', `${String(x).replace('.', ',')} V`, ',')).toBe(x);
		}),
		{ seed: 519 }
	);
});
