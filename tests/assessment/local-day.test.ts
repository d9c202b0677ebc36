import { describe, expect, it } from 'vitest';
import { localDayOf } from '$lib/assessment/local-day';

const hours = (instant: string, zone: string) => {
	const day = localDayOf(Date.parse(instant), zone);
	return [day.date, new Date(day.start_ms).toISOString(), (day.end_ms - day.start_ms) / 3_600_000];
};

// Clock changes of 2026: IANA time zone database.
describe('days of the site', () => {
	it.each([
		['2026-03-02T12:00:00Z', 'UTC', '2026-03-02', '2026-03-02T00:00:00.000Z', 24],
		['2026-03-02T00:00:00Z', 'UTC', '2026-03-02', '2026-03-02T00:00:00.000Z', 24],
		['2026-03-02T03:00:00Z', 'America/Chicago', '2026-03-01', '2026-03-01T06:00:00.000Z', 24],
		['2026-03-08T20:00:00Z', 'America/Chicago', '2026-03-08', '2026-03-08T06:00:00.000Z', 23],
		['2026-11-01T20:00:00Z', 'America/Chicago', '2026-11-01', '2026-11-01T05:00:00.000Z', 25],
		['2026-03-29T00:30:00Z', 'Europe/Berlin', '2026-03-29', '2026-03-28T23:00:00.000Z', 23],
		['2026-10-25T22:59:59Z', 'Europe/Berlin', '2026-10-25', '2026-10-24T22:00:00.000Z', 25],
		['2026-05-05T18:29:59Z', 'Asia/Kolkata', '2026-05-05', '2026-05-04T18:30:00.000Z', 24],
		['2026-05-05T18:30:00Z', 'Asia/Kolkata', '2026-05-06', '2026-05-05T18:30:00.000Z', 24]
	])('%s in %s', (instant, zone, date, start, length_h) => {
		expect(hours(instant, zone)).toEqual([date, start, length_h]);
	});

	it('finds the day also where midnight itself is skipped (Beirut, spring)', () => {
		const [date, , length_h] = hours('2026-03-29T10:00:00Z', 'Asia/Beirut');
		expect(date).toBe('2026-03-29');
		expect(length_h).toBe(23);
	});
});
