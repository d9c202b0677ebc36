import { DUE_SOON_DAYS, type CalibrationState } from '../../register/instrument-facts';

const STATES: readonly CalibrationState[] = ['valid', 'soon', 'overdue', 'none'];

/** The state asked for in an address; null for none or one that is not known. */
export function parseCalibrationFilter(value: string | null): CalibrationState | null {
	return STATES.find((state) => state === value) ?? null;
}

/** The day DUE_SOON_DAYS after an ISO day. */
export function soonUntil(today: string): string {
	const day = new Date(`${today}T00:00:00Z`);
	day.setUTCDate(day.getUTCDate() + DUE_SOON_DAYS);
	return day.toISOString().slice(0, 10);
}

/** The same rule as calibrationState(), as a filter on the last due day. */
export const CALIBRATION_STATE_SQL: Record<CalibrationState, string> = {
	none: 'due_on is null',
	overdue: 'due_on < :today',
	soon: 'due_on >= :today and due_on <= :soon',
	valid: 'due_on > :soon'
};

/** The latest of the due days, which is the one that counts; null without a certificate. */
export function lastDueDay(calibrations: readonly { due_on: string }[]): string | null {
	return calibrations.reduce<string | null>(
		(last, { due_on }) => (last === null || due_on > last ? due_on : last),
		null
	);
}
