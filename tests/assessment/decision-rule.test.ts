import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { judge } from '$lib/assessment/decision-rule';

// Outcomes: ILAC-G8:09/2019, 4.2.3 (non-binary statement with guard band w = U); the clause is from memory.
describe('guarded rule with limit 7 and U 0.5', () => {
	it.each([
		[6.4999, '<=', 'compliant'],
		[6.5, '<=', 'compliant'],
		[6.5, '<', 'compliant-inside-uncertainty'],
		[6.5001, '<=', 'compliant-inside-uncertainty'],
		[6.9999, '<', 'compliant-inside-uncertainty'],
		[7, '<=', 'compliant-inside-uncertainty'],
		[7, '<', 'exceeds-inside-uncertainty'],
		[7.0001, '<=', 'exceeds-inside-uncertainty'],
		[7.5, '<=', 'exceeds-inside-uncertainty'],
		[7.5, '<', 'exceeds'],
		[7.5001, '<=', 'exceeds']
	] as const)('%d %s', (value, comparator, expected) => {
		expect(judge(value, 7, 0.5, comparator, 'guarded')).toBe(expected);
	});
});

describe('simple rule', () => {
	it.each([
		[6.9999, '<', 'compliant'],
		[7, '<', 'exceeds'],
		[7, '<=', 'compliant'],
		[7.0001, '<=', 'exceeds']
	] as const)('%d %s 7, whatever the uncertainty', (value, comparator, expected) => {
		for (const U of [0, 0.5, 5]) expect(judge(value, 7, U, comparator, 'simple')).toBe(expected);
	});
});

describe('for any figures', () => {
	const level = fc.double({ min: 1e-3, max: 1e3, noNaN: true });
	const options = { seed: 519 };
	const good = (verdict: string) => verdict.startsWith('compliant');

	it('both rules agree on the side of the limit', () => {
		fc.assert(
			fc.property(level, level, level, fc.constantFrom('<' as const, '<=' as const), (value, limit, U, c) => {
				expect(good(judge(value, limit, U, c, 'guarded'))).toBe(good(judge(value, limit, U, c, 'simple')));
			}),
			options
		);
	});

	it('a value on the limit is never compliant under “less than”, and never below it by rounding', () => {
		fc.assert(
			fc.property(level, level, (limit, U) => {
				expect(good(judge(limit, limit, U, '<', 'guarded'))).toBe(false);
				expect(good(judge(limit, limit, U, '<', 'simple'))).toBe(false);
				expect(good(judge(limit, limit, U, '<=', 'guarded'))).toBe(true);
				expect(judge(limit * (1 + 1e-15), limit, 0, '<=', 'simple')).toBe('exceeds');
			}),
			options
		);
	});

	it('scaling value, limit and uncertainty together changes nothing', () => {
		// Powers of two scale without rounding, so that the comparison is the very same.
		const power = fc.integer({ min: -20, max: 20 }).map((exponent) => 2 ** exponent);
		fc.assert(
			fc.property(level, level, level, power, (value, limit, U, s) => {
				expect(judge(value * s, limit * s, U * s, '<', 'guarded')).toBe(
					judge(value, limit, U, '<', 'guarded')
				);
			}),
			options
		);
	});

	it('a greater value never gets a better verdict', () => {
		const order = ['compliant', 'compliant-inside-uncertainty', 'exceeds-inside-uncertainty', 'exceeds'];
		fc.assert(
			fc.property(level, level, level, level, (a, b, limit, U) => {
				const [low, high] = a < b ? [a, b] : [b, a];
				expect(order.indexOf(judge(high, limit, U, '<', 'guarded'))).toBeGreaterThanOrEqual(
					order.indexOf(judge(low, limit, U, '<', 'guarded'))
				);
			}),
			options
		);
	});
});
