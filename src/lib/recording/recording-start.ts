import { isoLocal, parseIsoLocal, type WallClock } from './calendar';
import type { ReadRemark, RecordingStart } from './recording';

export interface UtcStart {
	/** Milliseconds since 1970-01-01 UTC, fraction of a millisecond kept. */
	utc_ms: number;
	/** Says so where the clock of the zone showed that time twice, or never. */
	remarks: ReadRemark[];
}

const MS_PER_MINUTE = 60_000;
const MS_PER_DAY = 86_400_000;

/** The wall clock read as if it were UTC. */
function asIfUtc_ms(clock: WallClock): number {
	const whole = Date.UTC(clock.year, clock.month - 1, clock.day, clock.hour, clock.minute, clock.second);
	return whole + (clock.fraction === '' ? 0 : Number(`0.${clock.fraction}`) * 1000);
}

/** Offset of a zone at an instant: wall clock minus UTC, ms. */
export function zoneOffset_ms(timeZone: string, utc_ms: number): number {
	const format = new Intl.DateTimeFormat('en-US', {
		timeZone,
		hourCycle: 'h23',
		year: 'numeric',
		month: '2-digit',
		day: '2-digit',
		hour: '2-digit',
		minute: '2-digit',
		second: '2-digit'
	});
	const whole_ms = Math.floor(utc_ms / 1000) * 1000;
	const parts = new Map(format.formatToParts(whole_ms).map(({ type, value }) => [type, Number(value)]));
	const part = (name: Intl.DateTimeFormatPartTypes) => parts.get(name) as number;
	return (
		Date.UTC(part('year'), part('month') - 1, part('day'), part('hour'), part('minute'), part('second')) -
		whole_ms
	);
}

/**
 * The instant of a recording's first sample. A file's own UTC offset is taken as it stands; without one the
 * site's IANA zone decides. A time that the zone's clock showed twice is taken as the first of the two, one
 * that it skipped is read with the offset before the change; both are remarked on.
 * Throws for a start that is not a local ISO time or for an unknown zone: both are checked where they enter.
 */
export function startToUtc_ms(start: RecordingStart, siteTimeZone: string): UtcStart {
	const clock = parseIsoLocal(start.local);
	if (clock === null) throw new Error(`Not a local ISO date and time: ${start.local}`);
	const wall_ms = asIfUtc_ms(clock);
	if (start.utcOffset_min !== null)
		return { utc_ms: wall_ms - start.utcOffset_min * MS_PER_MINUTE, remarks: [] };
	const before_ms = zoneOffset_ms(siteTimeZone, wall_ms - MS_PER_DAY);
	const after_ms = zoneOffset_ms(siteTimeZone, wall_ms + MS_PER_DAY);
	const candidates = [...new Set([before_ms, after_ms])].map((offset_ms) => wall_ms - offset_ms);
	const valid = candidates
		.filter((utc_ms) => utc_ms + zoneOffset_ms(siteTimeZone, utc_ms) === wall_ms)
		.sort((one, other) => one - other);
	const [first, second] = valid;
	if (first === undefined) return { utc_ms: wall_ms - before_ms, remarks: [skipped(clock, siteTimeZone)] };
	return { utc_ms: first, remarks: second === undefined ? [] : [twice(clock, siteTimeZone)] };
}

function spoken(clock: WallClock): string {
	return isoLocal({ ...clock, fraction: '' }).replace('T', ' ');
}

function twice(clock: WallClock, timeZone: string): ReadRemark {
	return {
		severity: 'warning',
		code: 'start-ambiguous',
		sentence: `The clock in ${timeZone} showed ${spoken(clock)} twice when it was set back; the first of the two was taken as the start. Check it against the recorder’s notes.`
	};
}

function skipped(clock: WallClock, timeZone: string): ReadRemark {
	return {
		severity: 'warning',
		code: 'start-nonexistent',
		sentence: `The clock in ${timeZone} never showed ${spoken(clock)}, because it was set forward then; the recorder’s clock was taken as not yet changed. Check its settings.`
	};
}
