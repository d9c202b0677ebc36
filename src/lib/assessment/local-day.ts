export interface LocalDay {
	/** ISO date at the site, e.g. "2026-03-29". */
	date: string;
	/** Milliseconds since 1970-01-01 UTC; `end_ms` is the next local midnight. */
	start_ms: number;
	end_ms: number;
}

interface WallClock {
	date: string;
	/** Milliseconds of the day that the clock on the wall shows. */
	sinceMidnight_ms: number;
}

const DAY_MS = 86_400_000;

const formats = new Map<string, Intl.DateTimeFormat>();

function formatFor(timeZone: string): Intl.DateTimeFormat {
	const known = formats.get(timeZone);
	if (known !== undefined) return known;
	const made = new Intl.DateTimeFormat('en-CA', {
		timeZone,
		calendar: 'iso8601',
		hourCycle: 'h23',
		year: 'numeric',
		month: '2-digit',
		day: '2-digit',
		hour: '2-digit',
		minute: '2-digit',
		second: '2-digit'
	});
	formats.set(timeZone, made);
	return made;
}

function wallClock(instant_ms: number, timeZone: string): WallClock {
	const parts: Record<string, string> = {};
	for (const { type, value } of formatFor(timeZone).formatToParts(instant_ms)) parts[type] = value;
	const part = (name: string) => Number(parts[name]);
	const seconds = part('hour') * 3600 + part('minute') * 60 + part('second');
	const fraction_ms = ((instant_ms % 1000) + 1000) % 1000;
	return {
		date: `${parts['year']}-${parts['month']}-${parts['day']}`,
		sinceMidnight_ms: seconds * 1000 + fraction_ms
	};
}

/**
 * The instant at which the local date changes between two moments, one inside the day and one outside it.
 * returns  the first millisecond on the later side
 */
function dayBreak(inside_ms: number, outside_ms: number, date: string, timeZone: string): number {
	let inside = inside_ms;
	let outside = Math.floor(outside_ms);
	while (Math.abs(outside - inside) > 1) {
		const middle = Math.floor((inside + outside) / 2);
		if (wallClock(middle, timeZone).date === date) inside = middle;
		else outside = middle;
	}
	return Math.max(inside, outside);
}

/**
 * The calendar day of the site in which an instant lies. Days of clock changes are 23 or 25 hours long, and a
 * zone may skip midnight itself, so both ends are looked for and not computed.
 * timeZone  IANA name; an unknown name throws a RangeError (names are checked where a site is entered)
 */
export function localDayOf(instant_ms: number, timeZone: string): LocalDay {
	const floor_ms = Math.floor(instant_ms);
	const { date, sinceMidnight_ms } = wallClock(floor_ms, timeZone);
	const dayOf = (at_ms: number) => wallClock(at_ms, timeZone).date;
	const usualStart_ms = floor_ms - sinceMidnight_ms;
	const usualEnd_ms = usualStart_ms + DAY_MS;
	const startsThere = dayOf(usualStart_ms) === date && dayOf(usualStart_ms - 1) !== date;
	const endsThere = usualEnd_ms > floor_ms && dayOf(usualEnd_ms - 1) === date && dayOf(usualEnd_ms) !== date;
	return {
		date,
		start_ms: startsThere ? usualStart_ms : dayBreak(floor_ms, floor_ms - 1.5 * DAY_MS, date, timeZone),
		end_ms: endsThere ? usualEnd_ms : dayBreak(floor_ms, floor_ms + 1.5 * DAY_MS, date, timeZone)
	};
}
