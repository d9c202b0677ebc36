import { describe, expect, it } from 'vitest';
import { limitSetByName } from '$lib/limits/limit-set-name';
import { LIMIT_FILE_KEYS, limitSet } from './load-limit-files';

const SETS = LIMIT_FILE_KEYS.map(limitSet);

describe('the name of a limit set', () => {
	it.each([
		['IEEE 519-2022', 'ieee-519-2022'],
		['IEEE Std 519-2022', 'ieee-519-2022'],
		['ieee std. 519 2014', 'ieee-519-2014'],
		['ieee-519-1992', 'ieee-519-1992'],
		['EN 50160:2022', 'en-50160-2022'],
		['IEC 61000-2-4', 'iec-61000-2-4-2002'],
		['GB/T 14549-1993', 'gbt-14549-1993'],
		['IEC TR 61000-3-6', 'iec-tr-61000-3-6-2008']
	])('%s is %s', (name, key) => {
		const found = limitSetByName(name, SETS);
		expect(found.ok && found.value.key).toBe(key);
	});

	it.each(LIMIT_FILE_KEYS)('%s is found by its key and by standard and edition', (key) => {
		const { standard, edition } = limitSet(key);
		for (const name of [key, `${standard} ${edition}`, `${standard}-${edition}`]) {
			const found = limitSetByName(name, SETS);
			expect(found.ok && found.value.key).toBe(key);
		}
	});

	it('lists the editions of a standard, and all sets for what is none', () => {
		const several = limitSetByName('IEEE 519', SETS);
		expect(several.ok || several.problem).toMatch(/several limit sets.*1992.*2014.*2022/);
		for (const name of ['', 'House rules']) {
			const none = limitSetByName(name, SETS);
			if (none.ok) throw new Error(`“${name}” was found`);
			for (const key of LIMIT_FILE_KEYS) expect(none.problem).toContain(key);
		}
	});
});
