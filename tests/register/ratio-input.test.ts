import { describe, expect, it } from 'vitest';
import { formatRatio, parseRatio } from '$lib/register/ratio-input';

describe('transformer ratios', () => {
	it.each([
		['current', '1600/5', 1600, 5],
		['current', '1600 : 5 A', 1600, 5],
		['current', '0.8 kA / 1 A', 800, 1],
		['voltage', '14400/120', 14_400, 120],
		['voltage', '14.4 kV/120 V', 14_400, 120],
		['voltage', '11000/√3 : 110/√3', 11_000, 110],
		['voltage', '11000/sqrt(3) / 110/sqrt(3)', 11_000, 110]
	] as const)('%s %s', (kind, typed, primary, secondary) => {
		expect(parseRatio(kind, typed)).toEqual({ ok: true, value: { primary, secondary } });
	});

	it.each(['1600', '1600/', '/5', '5/1600', '1600/5/1', '0/5', '1600/0', '11000/√3 : 110'])(
		'refuses %s',
		(typed) => {
			const parsed = parseRatio('current', typed);
			expect(parsed.ok).toBe(false);
			expect(!parsed.ok && parsed.problem).toContain('1600/5');
		}
	);

	it('is shown back as nameplates print it', () => {
		expect(formatRatio({ primary: 1600, secondary: 5 })).toBe('1600/5');
	});
});
