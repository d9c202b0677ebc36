import { z } from 'zod';
import { calendarDay, requiredText, text } from './form-text';

/** IEC 61000-4-7 accuracy classes of the instrument's harmonic readings. */
export const HARMONIC_CLASSES = ['I', 'II', 'unknown'] as const;

/** One input of an instrument, in the order of its terminals. */
export interface InputFacts {
	name: string;
	quantity: 'voltage' | 'current';
	/** Greatest rms value that the input takes, at the input itself, in rangeUnit; null = not known. */
	rangeRms: number | null;
	/** Volts at a current input where a sensor gives volts. */
	rangeUnit: 'A' | 'V';
	resolution_bits: number | null;
	/** The sensor that is plugged in as a rule; null = none, measured directly. */
	sensorId: string | null;
}

export interface InstrumentFacts {
	name: string;
	model: string;
	serialNumber: string;
	harmonicClass: (typeof HARMONIC_CLASSES)[number];
	/** In words, for an instrument whose inputs are not listed. */
	channels: string;
	sensors: string;
	inputs: InputFacts[];
	/** Ratio error of current sensors whose own is not known, percent of reading; null = not stated. */
	currentSensorError_pct: number | null;
	voltageSensorError_pct: number | null;
	notes: string;
}

export const calibrationSchema = z
	.object({
		certificateNumber: requiredText(100, 'Enter the number printed on the certificate.'),
		laboratory: text(200),
		calibratedOn: calendarDay('Enter the day of calibration, as on the certificate.'),
		dueOn: calendarDay('Enter the day by which the next calibration is due.'),
		note: text(1000).default('')
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

/** Days from an ISO day to another; negative when it lies before. */
export function daysUntil(day: string, today: string): number {
	return Math.round((Date.parse(`${day}T00:00:00Z`) - Date.parse(`${today}T00:00:00Z`)) / DAY_MS);
}

/**
 * State of an instrument's calibration on a day. The due day itself still counts as valid.
 * dueOn, today  ISO calendar days; dueOn null when there is no certificate
 */
export function calibrationState(dueOn: string | null, today: string): CalibrationState {
	if (dueOn === null) return 'none';
	if (dueOn < today) return 'overdue';
	return daysUntil(dueOn, today) <= DUE_SOON_DAYS ? 'soon' : 'valid';
}

/** "overdue by 12 days", "due today", "due in 30 days", "no certificate". */
export function calibrationWords(dueOn: string | null, today: string): string {
	if (dueOn === null) return 'no certificate';
	const left = daysUntil(dueOn, today);
	const days = Math.abs(left) === 1 ? '1 day' : `${Math.abs(left)} days`;
	if (left === 0) return 'due today';
	return left < 0 ? `overdue by ${days}` : `due in ${days}`;
}
