import { dayNumber, isRealDate, isRealTime } from '../../calendar';

/** A moment as a table writes it. */
export interface Stamp {
	/** Days since 1970-01-01; null where only a time of day is written. */
	day: number | null;
	/** Seconds of that day; null where only a date is written. */
	second: number | null;
	/** Minutes east of UTC, where written. */
	utcOffset_min: number | null;
}

/** Which of the first two numbers of a date like 03/04/2024 is the day; "year-first" takes no such date at all. */
export type DateOrder = 'year-first' | 'day-first' | 'month-first';

const YEAR_FIRST = /^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})/;
const YEAR_LAST = /^(\d{1,2})([-/.])(\d{1,2})\2(\d{4}|\d{2})/;
const CLOCK =
	/^(\d{1,2}):(\d{2})(?::(\d{2})(?:[.,:](\d{1,12}))?)?\s*(am|pm)?\.?(\d{1,12})?\s*(z|utc|[+-]\d{2}(?::?\d{2})?)?$/i;

function dateOf(
	text: string,
	order: DateOrder
): { day: number; length: number; numbers: [number, number] | null } | null {
	const first = YEAR_FIRST.exec(text);
	if (first !== null) {
		const [year, month, day] = [Number(first[1]), Number(first[2]), Number(first[3])];
		if (!isRealDate(year, month, day)) return null;
		return { day: dayNumber(year, month, day), length: first[0].length, numbers: null };
	}
	const last = order === 'year-first' ? null : YEAR_LAST.exec(text);
	if (last === null) return null;
	const [one, two] = [Number(last[1]), Number(last[3])];
	const written = Number(last[4]);
	const year = (last[4] ?? '').length === 4 ? written : written >= 80 ? 1900 + written : 2000 + written;
	const [day, month] = order === 'day-first' ? [one, two] : [two, one];
	if (!isRealDate(year, month, day)) return null;
	return { day: dayNumber(year, month, day), length: last[0].length, numbers: [one, two] };
}

function offsetOf(text: string | undefined): number | null {
	if (text === undefined) return null;
	if (/^(z|utc)$/i.test(text)) return 0;
	const digits = text.slice(1).replace(':', '');
	const minutes = Number(digits.slice(0, 2)) * 60 + Number(digits.slice(2) || '0');
	return text.startsWith('-') ? -minutes : minutes;
}

function clockOf(text: string): { second: number; utcOffset_min: number | null } | null {
	const match = CLOCK.exec(text);
	if (match === null) return null;
	let hour = Number(match[1]);
	const half = match[5]?.toLowerCase();
	if (half !== undefined) {
		if (hour < 1 || hour > 12) return null;
		hour = (hour % 12) + (half === 'pm' ? 12 : 0);
	}
	const minute = Number(match[2]);
	const second = match[3] === undefined ? 0 : Number(match[3]);
	if (!isRealTime(hour, minute, second)) return null;
	// Some loggers write the fraction after AM or PM: "3:21:43 PM.135".
	const fraction = match[4] ?? match[6];
	const whole = hour * 3600 + minute * 60 + second;
	return {
		second: fraction === undefined ? whole : Number(`${whole}.${fraction}`),
		utcOffset_min: offsetOf(match[7])
	};
}

/** "2024-03-05 10:20:30.125", "05.03.2024", "3:21:43 PM.135", "2024-03-05T10:20:30+01:00"; null for anything else. */
export function parseStamp(text: string, order: DateOrder): Stamp | null {
	const trimmed = text.trim().replace(/^"|"$/g, '').trim();
	const date = dateOf(trimmed, order);
	if (date === null) {
		const clock = clockOf(trimmed);
		return clock === null ? null : { day: null, ...clock };
	}
	const rest = trimmed
		.slice(date.length)
		.replace(/^(T|,|\s)\s*/i, '')
		.trim();
	if (rest === '') return { day: date.day, second: null, utcOffset_min: null };
	const clock = clockOf(rest);
	return clock === null ? null : { day: date.day, ...clock };
}

/** A cheap look before the expensive one: a stamp has a colon or two date marks. */
export function mayBeStamp(text: string): boolean {
	return /\d[:/.-]\d/.test(text);
}

export interface OrderGuess {
	order: DateOrder;
	/** False where every date of the sample reads both ways. */
	isCertain: boolean;
}

/** Which order the dates of a sample need; day first where both would do. */
export function guessDateOrder(texts: readonly string[]): OrderGuess {
	let sawBoth = false;
	for (const text of texts) {
		const match = YEAR_LAST.exec(text.trim().replace(/^"/, ''));
		if (match === null) continue;
		if (match[2] === '.' || Number(match[1]) > 12) return { order: 'day-first', isCertain: true };
		if (Number(match[3]) > 12) return { order: 'month-first', isCertain: true };
		sawBoth = true;
	}
	return { order: 'day-first', isCertain: !sawBoth };
}
