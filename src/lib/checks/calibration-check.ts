import { calibrationValidityDuring } from '../register/calibration-validity';
import { formatCalendarDate } from '../report/dates';
import type { CaptureCheck, CheckEvidence } from './capture-check';
import type { CaptureSubject, CheckedPoint } from './capture-subject';

const DAY_MS = 86_400_000;

/** Whether a certificate of the instrument counted on every day of the capture. */
export function checkCalibration(subject: CaptureSubject, { timeZone }: CheckedPoint): CaptureCheck {
	const check = {
		code: 'calibration',
		title: 'Calibration of the instrument',
		channelIndex: null,
		evidence: null
	};
	const { instrument } = subject;
	if (instrument === null)
		return {
			...check,
			outcome: 'warns',
			sentence: 'No instrument is named for this capture, so nothing is known of its calibration.',
			advice: 'Name the instrument of the survey, or of this capture.'
		};
	const validity = calibrationValidityDuring(instrument.certificates, subject, timeZone);
	const picture = { ...check, evidence: calibrationPicture(subject, instrument.certificates, timeZone) };
	switch (validity.state) {
		case 'none':
			return {
				...check,
				outcome: 'warns',
				sentence: `No calibration certificate of ${instrument.name} is on record.`,
				advice: 'Enter the certificate with the instrument, or have it calibrated.'
			};
		case 'valid':
			return {
				...picture,
				outcome: 'passes',
				sentence: `${instrument.name} was calibrated throughout (certificate ${validity.certificate.certificateNumber}).`,
				advice: ''
			};
		case 'expired':
			return {
				...picture,
				outcome: 'warns',
				sentence:
					`${instrument.name} was measuring on ${formatCalendarDate(validity.firstDayWithout)} without a calibration that counts: ` +
					`certificate ${validity.certificate.certificateNumber} was due on ${formatCalendarDate(validity.certificate.dueOn)}.`,
				advice:
					'Have it calibrated; if it is found within its limits, overrule this with the number of the new certificate.'
			};
		case 'not-yet':
			return {
				...picture,
				outcome: 'warns',
				sentence:
					`${instrument.name} was measuring on ${formatCalendarDate(validity.firstDayWithout)}, before its first certificate ` +
					`on record (${validity.certificate.certificateNumber}, ${formatCalendarDate(validity.certificate.calibratedOn)}).`,
				advice:
					'Enter the certificate that counted then; a wrong clock of the recorder shows like this as well.'
			};
	}
}

function calibrationPicture(
	{ start_ms, duration_s, name }: CaptureSubject,
	certificates: NonNullable<CaptureSubject['instrument']>['certificates'],
	timeZone: string
): CheckEvidence {
	return {
		kind: 'spans',
		timeZone,
		spans: certificates.map(({ certificateNumber, calibratedOn, dueOn }) => ({
			row: certificateNumber,
			from_ms: Date.parse(`${calibratedOn}T00:00:00Z`),
			to_ms: Date.parse(`${dueOn}T00:00:00Z`) + DAY_MS,
			label: `certificate ${certificateNumber}`,
			tone: 'good'
		})),
		marks: [{ at_ms: start_ms + 500 * duration_s, label: name }]
	};
}
