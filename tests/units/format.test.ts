import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
	formatCurrent,
	formatDuration,
	formatNumber,
	formatOrdinal,
	formatPct,
	formatShare,
	formatVoltage,
	NO_DATA
} from '$lib/units/format';
import { decimalsBeside, formatPctPair } from '$lib/units/format-beside';

const plain = (text: string) => text.replaceAll('\u00a0', ' ');

describe('print', () => {
	it('chooses the prefix', () => {
		expect(plain(formatVoltage(480))).toBe('480 V');
		expect(plain(formatVoltage(13_800))).toBe('13.8 kV');
		expect(plain(formatVoltage(277.13))).toBe('277 V');
		expect(plain(formatCurrent(31_378))).toBe('31.4 kA');
		expect(plain(formatCurrent(1804.2))).toBe('1,804 A');
		expect(plain(formatCurrent(9.634))).toBe('9.63 A');
	});

	it('follows the locale', () => {
		expect(plain(formatPct(9.63, { locale: 'de' }))).toBe('9,63 %');
		expect(formatNumber(1234.5, { locale: 'de', decimals: 1 })).toBe('1.234,5');
	});

	it('prints missing data as missing, never as zero', () => {
		for (const missing of [null, undefined, NaN, Infinity]) {
			expect(formatPct(missing)).toBe(NO_DATA);
			expect(formatVoltage(missing)).toBe(NO_DATA);
			expect(formatCurrent(missing)).toBe(NO_DATA);
			expect(formatDuration(missing)).toBe(NO_DATA);
			expect(formatShare(missing)).toBe(NO_DATA);
		}
		expect(plain(formatPct(0))).toBe('0.00 %');
	});

	it('prints durations in their two largest parts', () => {
		expect(plain(formatDuration(9.6))).toBe('9.60 s');
		expect(plain(formatDuration(90))).toBe('1 min 30 s');
		expect(plain(formatDuration(604_800))).toBe('7 d');
		expect(plain(formatDuration(90_061))).toBe('1 d 1 h');
		expect(plain(formatDuration(59.7))).toBe('59.7 s');
	});

	it('never rounds a share to all or to nothing', () => {
		expect(plain(formatShare(0.998))).toBe('> 99 %');
		expect(plain(formatShare(0.0001))).toBe('< 1 %');
		expect(plain(formatShare(1))).toBe('100 %');
		expect(plain(formatShare(0.42))).toBe('42 %');
	});

	it('names orders', () => {
		expect([1, 2, 3, 4, 11, 12, 13, 21, 22, 23, 50].map(formatOrdinal)).toEqual(
			'1st 2nd 3rd 4th 11th 12th 13th 21st 22nd 23rd 50th'.split(' ')
		);
	});
});

describe('a value beside its limit', () => {
	it('takes more digits where two would hide the difference', () => {
		const pair = formatPctPair(7.004, 7);
		expect(plain(pair.value)).toBe('7.004 %');
		expect(plain(pair.reference)).toBe('7.000 %');
		expect(plain(formatPctPair(9.63, 7).value)).toBe('9.63 %');
		expect(plain(formatPctPair(7, 7).value)).toBe('7.00 %');
	});

	it('prints in the true order whatever the values', () => {
		const level = fc.double({ min: 0.01, max: 100, noNaN: true });
		fc.assert(
			fc.property(level, fc.double({ min: -1e-6, max: 1e-6, noNaN: true }), (limit, offset) => {
				const value = limit * (1 + offset);
				const decimals = decimalsBeside(value, limit);
				const printed = Number(value.toFixed(decimals)) - Number(limit.toFixed(decimals));
				if (decimals < 15) expect(Math.sign(printed)).toBe(Math.sign(value - limit));
			}),
			{ seed: 519 }
		);
	});
});
