import { describe, expect, it } from 'vitest';
import { applicableSets, type ApplicabilityQuestion } from '$lib/limits/applicable-sets';
import { LIMIT_FILE_KEYS, limitSet } from './load-limit-files';

const sets = LIMIT_FILE_KEYS.map(limitSet);
const at = (change: Partial<ApplicabilityQuestion>) =>
	applicableSets(
		{ kind: 'pcc', nominalFrequency_Hz: 60, nominalVoltage_V: 480, country: null, ...change },
		sets
	);

// Where the editions are called up: common practice, and their own scope statements in the data files.
describe('the set that applies, and why', () => {
	it.each<[string, Partial<ApplicabilityQuestion>, string]>([
		['a 60 Hz service', {}, 'ieee-519-2022'],
		['a service in the United States', { country: 'US' }, 'ieee-519-2022'],
		['a European supply terminal', { country: 'DE', nominalFrequency_Hz: 50 }, 'en-50160-2022'],
		['a 50 Hz supply of unknown country', { nominalFrequency_Hz: 50 }, 'en-50160-2022'],
		['a supply in China', { country: 'CN', nominalFrequency_Hz: 50 }, 'gbt-14549-1993'],
		['a board inside a plant', { kind: 'in-plant', nominalFrequency_Hz: 50 }, 'iec-61000-2-4-2002']
	])('%s: %s', (_what, question, expected) => {
		const [best] = at(question);
		expect(best?.limitSet.key).toBe(expected);
		expect(best?.suitability).toBe('applies');
		expect(best?.reason).toMatch(/\.$/);
	});

	it('never suggests a superseded edition first, and says what it is good for', () => {
		const historic = at({}).find((set) => set.limitSet.key === 'ieee-519-2014');
		expect(historic?.suitability).toBe('historic');
		expect(historic?.reason).toContain('superseded');
		expect(at({})[0]?.suitability).not.toBe('historic');
	});

	it('keeps ship rules for ships and EN 50160 away from 60 Hz', () => {
		expect(at({}).some((set) => set.limitSet.key === 'iacs-ur-e24-2018')).toBe(false);
		expect(at({ marine: true }).map((set) => set.limitSet.key)).toContain('iacs-ur-e24-2018');
		expect(at({}).some((set) => set.limitSet.key.startsWith('en-50160-2022'))).toBe(false);
	});

	it('offers a practice’s own set before published ones of its rank', () => {
		const own = { ...limitSet('ieee-519-2022'), id: 99, key: 'tarn-utility', practiceId: 'p1' };
		const question = {
			kind: 'in-plant',
			nominalFrequency_Hz: 60,
			nominalVoltage_V: 480,
			country: null
		} as const;
		const ranked = applicableSets(question, [...sets, own]);
		const possible = ranked.filter((set) => set.suitability === 'possible');
		expect(possible[0]?.limitSet.key).toBe('tarn-utility');
	});

	it('knows a scope for every published file', () => {
		const everywhere = (['pcc', 'in-plant'] as const).flatMap((kind) =>
			[null, 'US', 'DE', 'GB', 'CN'].flatMap((country) =>
				[480, 11_000].flatMap((nominalVoltage_V) =>
					[true, false].flatMap((marine) =>
						at({ kind, country, nominalVoltage_V, marine, nominalFrequency_Hz: 50 })
					)
				)
			)
		);
		expect([...new Set(everywhere.map((set) => set.limitSet.key))].sort()).toEqual(
			[...LIMIT_FILE_KEYS].sort()
		);
	});
});
