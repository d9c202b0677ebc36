import { z } from 'zod';

/** Free text that may be left empty; outer blanks are dropped. */
export function text(longest: number) {
	return z.string().trim().max(longest, `Shorten this to ${longest} characters.`);
}

/** Text that must be given; `sentence` says what to enter. */
export function requiredText(longest: number, sentence: string) {
	return text(longest).min(1, sentence);
}

export const optionalEmail = text(254).refine(
	(value) => value === '' || z.email().safeParse(value).success,
	'Enter an address such as name@example.com, or leave this empty.'
);

/** A calendar day as the browser's date field sends it. */
export function calendarDay(sentence: string) {
	return z.string().trim().refine(isCalendarDay, sentence);
}

export function isCalendarDay(value: string): boolean {
	if (!/^\d{4}-\d{2}-\d{2}$/.test(value)) return false;
	const midnight = new Date(`${value}T00:00:00Z`);
	// "2026-02-30" would roll over into March.
	return !Number.isNaN(midnight.getTime()) && midnight.toISOString().startsWith(value);
}
