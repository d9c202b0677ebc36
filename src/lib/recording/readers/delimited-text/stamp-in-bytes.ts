import { dayNumber, isRealDate, isRealTime } from '../../calendar';
import type { DateOrder, Stamp } from './stamp-text';

/** Powers of ten for a fraction of up to twelve digits. */
const TENS = Array.from({ length: 13 }, (_, digits) => 10 ** digits);

function pair(bytes: Uint8Array, at: number): number {
	const tens = (bytes[at] as number) - 0x30;
	const ones = (bytes[at + 1] as number) - 0x30;
	return tens >= 0 && tens <= 9 && ones >= 0 && ones <= 9 ? 10 * tens + ones : NaN;
}

/** The day found last: rows of one day follow each other. */
const lastDay = { key: NaN, day: NaN };

function dayOf(year: number, month: number, day: number): number {
	const key = (year * 100 + month) * 100 + day;
	if (key !== lastDay.key) {
		if (!isRealDate(year, month, day)) return NaN;
		lastDay.day = dayNumber(year, month, day);
		lastDay.key = key;
	}
	return lastDay.day;
}

/**
 * The stamps that most loggers write, straight from their bytes: a date of ten characters in the order told, one
 * character between, hh:mm:ss and a fraction. Null for every other text: `parseStamp` reads those.
 */
export function stampInBytes(bytes: Uint8Array, from: number, to: number, order: DateOrder): Stamp | null {
	if (to - from < 19) return null;
	let year: number;
	let month: number;
	let date: number;
	if (order === 'year-first') {
		year = 100 * pair(bytes, from) + pair(bytes, from + 2);
		month = pair(bytes, from + 5);
		date = pair(bytes, from + 8);
		if (!areMarks(bytes[from + 4] as number, bytes[from + 7] as number)) return null;
	} else {
		const one = pair(bytes, from);
		const other = pair(bytes, from + 3);
		year = 100 * pair(bytes, from + 6) + pair(bytes, from + 8);
		[date, month] = order === 'day-first' ? [one, other] : [other, one];
		if (!areMarks(bytes[from + 2] as number, bytes[from + 5] as number)) return null;
	}
	const between = bytes[from + 10];
	if ((between !== 0x20 && between !== 0x54) || bytes[from + 13] !== 0x3a || bytes[from + 16] !== 0x3a)
		return null;
	const hour = pair(bytes, from + 11);
	const minute = pair(bytes, from + 14);
	const second = pair(bytes, from + 17);
	const day = dayOf(year, month, date);
	if (Number.isNaN(day) || !isRealTime(hour, minute, second)) return null;
	const whole = hour * 3600 + minute * 60 + second;
	if (to === from + 19) return { day, second: whole, utcOffset_min: null };
	const mark = bytes[from + 19];
	const digits = to - from - 20;
	// More than ten digits behind five before would not stay exact: those go the long way.
	if ((mark !== 0x2e && mark !== 0x2c) || digits < 1 || digits > 10) return null;
	let units = whole;
	for (let at = from + 20; at < to; at++) {
		const digit = (bytes[at] as number) - 0x30;
		if (digit < 0 || digit > 9) return null;
		units = units * 10 + digit;
	}
	return { day, second: units / (TENS[digits] as number), utcOffset_min: null };
}

function areMarks(one: number, other: number): boolean {
	return one === other && (one === 0x2d || one === 0x2f || one === 0x2e);
}
