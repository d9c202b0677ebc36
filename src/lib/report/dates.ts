/** Calendar day of an instant in a zone, as a report prints it: "19 March 2026". */
export function formatDay(instant: string, timeZone: string): string {
	return new Intl.DateTimeFormat('en-GB', {
		day: 'numeric',
		month: 'long',
		year: 'numeric',
		timeZone
	}).format(new Date(instant));
}

/** The same, short, for narrow cells: "19 Mar 2026". */
export function formatShortDay(instant: string, timeZone: string): string {
	return new Intl.DateTimeFormat('en-GB', {
		day: 'numeric',
		month: 'short',
		year: 'numeric',
		timeZone
	}).format(new Date(instant));
}

/** "10 March 2026, 14:05:30" in the zone, 24-hour clock. */
export function formatMoment(instant: string, timeZone: string): string {
	const clock = new Intl.DateTimeFormat('en-GB', {
		hour: '2-digit',
		minute: '2-digit',
		second: '2-digit',
		hour12: false,
		timeZone
	}).format(new Date(instant));
	return `${formatDay(instant, timeZone)}, ${clock}`;
}

/** A calendar date without zone ("2026-04-30") as "30 April 2026". */
export function formatCalendarDate(date: string): string {
	return formatDay(`${date.slice(0, 10)}T12:00:00Z`, 'UTC');
}

/** The same, short: "30 Apr 2026". */
export function formatShortCalendarDate(date: string): string {
	return formatShortDay(`${date.slice(0, 10)}T12:00:00Z`, 'UTC');
}

/** "3 to 10 March 2026", "10 March 2026", "28 February to 6 March 2026". */
export function formatPeriod(from: string, to: string, timeZone: string): string {
	const first = formatDay(from, timeZone);
	const last = formatDay(to, timeZone);
	if (first === last) return first;
	const [firstDay = '', firstMonth = '', firstYear = ''] = first.split(' ');
	const [, lastMonth, lastYear] = last.split(' ');
	if (firstYear !== lastYear) return `${first} to ${last}`;
	return firstMonth === lastMonth ? `${firstDay} to ${last}` : `${firstDay} ${firstMonth} to ${last}`;
}
