/** A date and time of day as a clock on the wall shows it, without a zone. */
export interface WallClock {
	year: number;
	month: number;
	day: number;
	hour: number;
	minute: number;
	/** Whole seconds, 0…60 (60 only in a leap second). */
	second: number;
	/** Digits after the decimal sign, as written, at most nine; empty for none. */
	fraction: string;
}

const MS_PER_DAY = 86_400_000;

export function isLeapYear(year: number): boolean {
	return (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
}

export function isRealDate(year: number, month: number, day: number): boolean {
	if (month < 1 || month > 12 || day < 1) return false;
	const lengths = [31, isLeapYear(year) ? 29 : 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];
	return day <= (lengths[month - 1] as number);
}

export function isRealTime(hour: number, minute: number, second: number): boolean {
	return hour >= 0 && hour <= 23 && minute >= 0 && minute <= 59 && second >= 0 && second <= 60;
}

/** Days since 1970-01-01 of a date that exists. */
export function dayNumber(year: number, month: number, day: number): number {
	const date = new Date(0);
	date.setUTCFullYear(year, month - 1, day);
	return Math.floor(date.getTime() / MS_PER_DAY);
}

function padded(value: number, width: number): string {
	return String(value).padStart(width, '0');
}

/** ISO form without a zone: 2024-03-31T02:30:00.123456. */
export function isoLocal(clock: WallClock): string {
	const date = `${padded(clock.year, 4)}-${padded(clock.month, 2)}-${padded(clock.day, 2)}`;
	const time = `${padded(clock.hour, 2)}:${padded(clock.minute, 2)}:${padded(clock.second, 2)}`;
	return clock.fraction === '' ? `${date}T${time}` : `${date}T${time}.${clock.fraction}`;
}

const ISO_LOCAL = /^(\d{4})-(\d\d)-(\d\d)T(\d\d):(\d\d):(\d\d)(?:\.(\d{1,9}))?$/;

/** The way back; null for a text that is no such moment. */
export function parseIsoLocal(text: string): WallClock | null {
	const match = ISO_LOCAL.exec(text);
	if (match === null) return null;
	const [year, month, day, hour, minute, second] = match.slice(1, 7).map(Number) as [
		number,
		number,
		number,
		number,
		number,
		number
	];
	if (!isRealDate(year, month, day) || !isRealTime(hour, minute, second)) return null;
	return { year, month, day, hour, minute, second, fraction: match[7] ?? '' };
}

/** Seconds since 1970-01-01 00:00 on the same wall clock, fraction included. */
export function wallSeconds(clock: WallClock): number {
	const day = dayNumber(clock.year, clock.month, clock.day);
	const seconds = clock.hour * 3600 + clock.minute * 60 + clock.second;
	return day * 86_400 + seconds + (clock.fraction === '' ? 0 : Number(`0.${clock.fraction}`));
}
