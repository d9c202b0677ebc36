import { z } from 'zod';
import { calendarDay, requiredText, text } from './form-text';

/** IEC 61000-4-7 accuracy classes of the instrument's harmonic readings. */
export const HARMONIC_CLASSES = ['I', 'II', 'unknown'] as const;

export interface InstrumentFacts {
	name: string;
	model: string;
	serialNumber: string;
	harmonicClass: (typeof HARMONIC_CLASSES)[number];
	channels: string;
	sensors: string;
	/** Ratio error of current sensors, percent of reading; null = not stated. */
	currentSensorError_pct: number | null;
	voltageSensorError_pct: number | null;
	notes: string;
}

export const calibrationSchema = z
	.object({
		certificateNumber: requiredText(100, 'Enter the number printed on the certificate.'),
		laboratory: text(200),
		calibratedOn: calendarDay('Enter the day of calibration, as on the certificate.'),
		dueOn: calendarDay('Enter the day by which the next calibration is due.')
	})
	.superRefine((calibration, context) => {
		// ISO days order as text.
		if (calibration.dueOn <= calibration.calibratedOn)
			context.addIssue({
				code: 'custom',
				path: ['dueOn'],
				message: 'The next calibration is due after this one: enter a later day.'
			});
	});
export type CalibrationFacts = z.infer<typeof calibrationSchema>;

/** `none`: no certificate on record; `soon`: due within 60 days. */
export type CalibrationState = 'none' | 'valid' | 'soon' | 'overdue';
export const DUE_SOON_DAYS = 60;
const DAY_MS = 86_400_000;

/**
 * State of an instrument's calibration on a day. The due day itself still counts as valid.
 * dueOn, today  ISO calendar days; dueOn null when there is no certificate
 */
export function calibrationState(dueOn: string | null, today: string): CalibrationState {
	if (dueOn === null) return 'none';
	if (dueOn < today) return 'overdue';
	const left_days = (Date.parse(`${dueOn}T00:00:00Z`) - Date.parse(`${today}T00:00:00Z`)) / DAY_MS;
	return left_days <= DUE_SOON_DAYS ? 'soon' : 'valid';
}
