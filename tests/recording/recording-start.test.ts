import { describe, expect, it } from 'vitest';
import { startToUtc_ms } from '$lib/recording/recording-start';

const utc = (local: string, zone: string, utcOffset_min: number | null = null) =>
	startToUtc_ms({ local, utcOffset_min }, zone);

// Rules of the zones: IANA time zone database (Europe/Berlin changes at 01:00 UTC on the last Sundays of March
// and October; America/New_York at 02:00 local on the second Sunday of March and the first of November;
// Lord Howe Island moves by half an hour; Asia/Kolkata stays at +05:30).
describe('the instant of a start', () => {
	it('takes the file’s own offset before any zone', () => {
		expect(utc('2011-01-12T05:55:30.075011', 'Europe/Berlin', -330).utc_ms).toBe(
			Date.UTC(2011, 0, 12, 11, 25, 30) + 75.011
		);
	});

	it.each([
		['2024-01-15T12:00:00', 'Europe/Berlin', Date.UTC(2024, 0, 15, 11)],
		['2024-07-15T12:00:00', 'Europe/Berlin', Date.UTC(2024, 6, 15, 10)],
		['2024-07-15T12:00:00', 'America/New_York', Date.UTC(2024, 6, 15, 16)],
		['2024-03-10T03:00:00', 'America/New_York', Date.UTC(2024, 2, 10, 7)],
		['2024-03-10T01:59:59', 'America/New_York', Date.UTC(2024, 2, 10, 6, 59, 59)],
		['2024-07-15T12:00:00', 'Asia/Kolkata', Date.UTC(2024, 6, 15, 6, 30)],
		['1999-12-31T23:59:59', 'UTC', Date.UTC(1999, 11, 31, 23, 59, 59)]
	])('%s in %s', (local, zone, expected) => {
		expect(utc(local, zone)).toEqual({ utc_ms: expected, remarks: [] });
	});

	it('takes the first of two moments when the clock was set back, and says so', () => {
		const { utc_ms, remarks } = utc('2024-10-27T02:30:00', 'Europe/Berlin');
		expect(utc_ms).toBe(Date.UTC(2024, 9, 27, 0, 30));
		expect(remarks.map(({ code }) => code)).toEqual(['start-ambiguous']);
		expect(remarks[0]?.sentence).toContain('2024-10-27 02:30:00');
	});

	it('reads a skipped time with the offset before the change, and says so', () => {
		const { utc_ms, remarks } = utc('2024-03-31T02:30:00', 'Europe/Berlin');
		expect(utc_ms).toBe(Date.UTC(2024, 2, 31, 1, 30));
		expect(remarks.map(({ code }) => code)).toEqual(['start-nonexistent']);
	});

	it('knows changes of half an hour', () => {
		expect(utc('2024-04-07T01:45:00', 'Australia/Lord_Howe').remarks.map(({ code }) => code)).toEqual([
			'start-ambiguous'
		]);
	});

	it('keeps fractions of a millisecond', () => {
		expect(utc('2024-01-15T12:00:00.000250', 'UTC').utc_ms % 1).toBeCloseTo(0.25, 3);
	});

	it('throws for a start that no reader makes', () => {
		expect(() => utc('15/01/2024', 'UTC')).toThrow('15/01/2024');
	});
});
