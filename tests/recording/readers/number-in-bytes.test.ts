import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	COMMA,
	DOT,
	isBlankInBytes,
	numberInBytes,
	numberInText
} from '$lib/recording/readers/number-in-bytes';
import { PINNED_SEED } from '../../synthesis/waveform-arbitrary';

const bytes = (text: string) => new TextEncoder().encode(text);
const parse = (text: string, decimal = DOT) => numberInBytes(bytes(text), 0, bytes(text).length, decimal);

describe('a number in bytes', () => {
	// Number() is the language's own correctly rounded conversion (ECMA-262, StringToNumber).
	it('is the very double that Number() makes of the same text', () => {
		const text = fc.oneof(
			fc.double({ noNaN: true, noDefaultInfinity: true }).map(String),
			fc.integer().map(String),
			fc.tuple(fc.bigInt(-(10n ** 24n), 10n ** 24n), fc.nat(25)).map(([digits, places]) => {
				const plain = String(digits);
				const at = Math.max(plain.startsWith('-') ? 2 : 1, plain.length - places);
				return `${plain.slice(0, at)}.${plain.slice(at)}`;
			}),
			fc.tuple(fc.integer(), fc.integer({ min: -330, max: 298 })).map(([m, e]) => `${m}E${e}`)
		);
		fc.assert(
			fc.property(text, (written) => {
				expect(parse(written)).toBe(Number(written));
				expect(parse(written.replace('.', ','), COMMA)).toBe(Number(written));
			}),
			{ seed: PINNED_SEED, numRuns: 20_000 }
		);
	});

	it.each([
		['  12.5 ', 12.5],
		['"3.25"', 3.25],
		['+7', 7],
		['-.5', -0.5],
		['5.', 5],
		['1e3', 1000],
		['000123', 123]
	])('%j is %d', (text, value) => expect(parse(text)).toBe(value));

	it.each([
		'',
		'  ',
		'-',
		'.',
		'abc',
		'1.2.3',
		'1,2',
		'12 V',
		'1e',
		'1e+',
		'NaN',
		'inf',
		'--1',
		'0x10',
		'1e400',
		'-1e400'
	])('%j is no number', (text) => expect(parse(text)).toBeNaN());

	it('is told from a very long text that is none without trying its digits in every division', () => {
		const digits = '9'.repeat(400_000);
		expect(numberInText(`${digits}x`)).toBeNaN();
		expect(numberInText(`0.${digits}`)).toBe(1);
		expect(numberInText('5.')).toBe(5);
	});

	it('keeps the sign of zero', () => expect(Object.is(parse('-0'), -0)).toBe(true));

	it('tells blank fields', () => {
		expect(isBlankInBytes(bytes(' \t""'), 0, 4)).toBe(true);
		expect(isBlankInBytes(bytes(' 0'), 0, 2)).toBe(false);
	});
});
