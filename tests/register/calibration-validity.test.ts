import { describe, expect, it } from 'vitest';
import { calibrationValidityDuring, calibrationValidityOnDays } from '$lib/register/calibration-validity';

const first = { certificateNumber: 'C-1', calibratedOn: '2024-03-01', dueOn: '2025-03-01' };
const next = { certificateNumber: 'C-2', calibratedOn: '2025-02-20', dueOn: '2026-02-20' };
const late = { certificateNumber: 'C-3', calibratedOn: '2026-04-01', dueOn: '2027-04-01' };

describe('standing of a calibration while something was measured', () => {
	it('counts on its first and on its due day', () => {
		expect(calibrationValidityOnDays([first], '2024-03-01', '2024-03-01').state).toBe('valid');
		expect(calibrationValidityOnDays([first], '2025-03-01', '2025-03-01').state).toBe('valid');
	});

	it('is expired the day after, and names the certificate that ran out', () => {
		expect(calibrationValidityOnDays([first], '2025-03-02', '2025-03-02')).toEqual({
			state: 'expired',
			certificate: first,
			firstDayWithout: '2025-03-02'
		});
	});

	it('lets certificates that follow each other cover a time together, in any order', () => {
		expect(calibrationValidityOnDays([late, next, first], '2025-02-25', '2025-03-10')).toEqual({
			state: 'valid',
			certificate: next
		});
		expect(calibrationValidityOnDays([next, first], '2024-12-01', '2025-12-01').state).toBe('valid');
	});

	it('sees a gap in the middle of a long measurement', () => {
		expect(calibrationValidityOnDays([first, next, late], '2026-02-01', '2026-05-01')).toEqual({
			state: 'expired',
			certificate: next,
			firstDayWithout: '2026-02-21'
		});
	});

	it('tells a calibration made afterwards from none at all', () => {
		expect(calibrationValidityOnDays([late, next], '2024-06-01', '2024-06-02')).toEqual({
			state: 'not-yet',
			certificate: next,
			firstDayWithout: '2024-06-01'
		});
		expect(calibrationValidityOnDays([], '2024-06-01', '2024-06-02')).toEqual({ state: 'none' });
	});

	it('reads the day off the calendar of the site', () => {
		// 2 March 2025, 03:30 UTC is still 1 March in Chicago (UTC−6).
		const capture = { start_ms: Date.parse('2025-03-02T03:30:00Z'), duration_s: 60 };
		expect(calibrationValidityDuring([first], capture, 'America/Chicago').state).toBe('valid');
		expect(calibrationValidityDuring([first], capture, 'UTC').state).toBe('expired');
	});

	it('looks at the end of the capture too', () => {
		const capture = { start_ms: Date.parse('2025-02-27T12:00:00Z'), duration_s: 7 * 86_400 };
		expect(calibrationValidityDuring([first], capture, 'UTC')).toMatchObject({
			state: 'expired',
			firstDayWithout: '2025-03-02'
		});
	});
});
