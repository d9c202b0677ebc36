import { describe, expect, it } from 'vitest';
import { parseRichSymbols } from '$lib/units/rich-symbol';

describe('parseRichSymbols', () => {
	it('typesets the short-circuit ratio', () => {
		expect(parseRichSymbols('I_sc/I_L 31.2')).toEqual([
			{ kind: 'symbol', name: 'I', sub: 'sc' },
			{ kind: 'text', text: '/' },
			{ kind: 'symbol', name: 'I', sub: 'L' },
			{ kind: 'text', text: ' 31.2' }
		]);
	});

	it('takes subscripts in braces and with a figure after a comma', () => {
		expect(parseRichSymbols('I_{h+1}')).toEqual([{ kind: 'symbol', name: 'I', sub: 'h+1' }]);
		expect(parseRichSymbols('U_h,95')).toEqual([{ kind: 'symbol', name: 'U', sub: 'h,95' }]);
	});

	it('ends a sentence without taking its stop', () => {
		expect(parseRichSymbols('percent of I_L.')).toEqual([
			{ kind: 'text', text: 'percent of ' },
			{ kind: 'symbol', name: 'I', sub: 'L' },
			{ kind: 'text', text: '.' }
		]);
	});

	it.each(['my_file_1.csv', 'HARROW_01.DAT', 'a_b.cfg', 'C_1.CSV'])(
		'leaves the file name %s alone',
		(name) => {
			expect(parseRichSymbols(name)).toEqual([{ kind: 'text', text: name }]);
		}
	);
});
