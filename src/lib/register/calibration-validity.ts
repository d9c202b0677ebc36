import { localDayOf } from '../assessment/local-day';

/** What decides whether a certificate counts on a day. */
export interface CertificateSpan {
	certificateNumber: string;
	/** ISO calendar days, both counted in. */
	calibratedOn: string;
	dueOn: string;
}

/**
 * Standing of a calibration over a time that was measured.
 * `valid`      a certificate counts on every day of it
 * `expired`    a day of it lies after the last due day: `firstDayWithout` and the certificate that ran out before it
 * `not-yet`    the first certificate was made only after that day
 * `none`       no certificate on record
 */
export type CalibrationValidity<C extends CertificateSpan> =
	| { state: 'valid'; certificate: C }
	| { state: 'expired' | 'not-yet'; certificate: C; firstDayWithout: string }
	| { state: 'none' };

const DAY_MS = 86_400_000;

function dayAfter(day: string): string {
	return new Date(Date.parse(`${day}T00:00:00Z`) + DAY_MS).toISOString().slice(0, 10);
}

/** The one that counts longest of those with a property; ISO days order as text. */
function lastDue<C extends CertificateSpan>(certificates: readonly C[]): C | null {
	return certificates.reduce<C | null>(
		(best, one) => (best === null || one.dueOn > best.dueOn ? one : best),
		null
	);
}

/**
 * Standing over calendar days, first and last counted in. Certificates may overlap and come in any order; several
 * in a row may cover the time together. With `valid` the certificate is the one that counted on the first day.
 */
export function calibrationValidityOnDays<C extends CertificateSpan>(
	certificates: readonly C[],
	firstDay: string,
	lastDay: string
): CalibrationValidity<C> {
	if (certificates.length === 0) return { state: 'none' };
	const counting = (day: string) =>
		lastDue(certificates.filter((one) => one.calibratedOn <= day && day <= one.dueOn));
	const atFirst = counting(firstDay);
	let day = firstDay;
	let counts = atFirst;
	while (counts !== null && counts.dueOn < lastDay) {
		day = dayAfter(counts.dueOn);
		counts = counting(day);
	}
	if (counts !== null && atFirst !== null) return { state: 'valid', certificate: atFirst };
	const before = lastDue(certificates.filter((one) => one.dueOn < day));
	if (before !== null) return { state: 'expired', certificate: before, firstDayWithout: day };
	const later = certificates.reduce((first, one) => (one.calibratedOn < first.calibratedOn ? one : first));
	return { state: 'not-yet', certificate: later, firstDayWithout: day };
}

/**
 * Standing of an instrument's or sensor's calibration while a capture was taken.
 * certificates  all of them, in any order
 * start_ms      instant of the first sample, ms since 1970 UTC
 * duration_s    length of the capture; 0 asks for one instant
 * timeZone      IANA zone of the site: its calendar decides which day it was
 */
export function calibrationValidityDuring<C extends CertificateSpan>(
	certificates: readonly C[],
	capture: { start_ms: number; duration_s: number },
	timeZone: string
): CalibrationValidity<C> {
	const end_ms = capture.start_ms + Math.max(0, capture.duration_s) * 1000;
	return calibrationValidityOnDays(
		certificates,
		localDayOf(capture.start_ms, timeZone).date,
		localDayOf(end_ms, timeZone).date
	);
}

/** Words beside the mark, for screens and the report. */
export const CALIBRATION_VALIDITY_WORDS: Record<CalibrationValidity<CertificateSpan>['state'], string> = {
	valid: 'calibrated',
	expired: 'calibration expired',
	'not-yet': 'calibrated only afterwards',
	none: 'no certificate'
};
