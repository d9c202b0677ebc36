import { z } from 'zod';
import { parseQuantity, quantitySchema, type QuantityKind } from '../units/quantity-input';
import { requiredText, text } from './form-text';
import { SENSOR_KINDS, type SensorFacts } from './sensor-facts';
import { formatSensorRatio, parseSensorRatio } from './sensor-ratio';
import { tidyQuantity, withoutBinaryTail } from './tidy-quantity';

/** Bounds that catch a wrong unit: what errs more is no sensor that harmonics are measured with. */
const LARGEST_ERROR_PCT = 20;
const LARGEST_ANGLE_DEG = 20;
const HIGHEST_FREQUENCY_HZ = 1e7;
const MINUTES_PER_DEGREE = 60;

/** "0.5°", "0.5 deg", "30'" or "30 min" (minutes of arc, as certificates give them) → degrees; null where neither. */
export function parseAngle_deg(value: string): number | null {
	const parts = /^(.*?\d)\s*(°|deg|degrees?|'|′|min|minutes?)?$/i.exec(value.trim());
	const number = parts?.[1] === undefined ? null : parseQuantity('number', parts[1]);
	if (number === null || !number.ok) return null;
	const inMinutes = /^('|′|min)/i.test(parts?.[2] ?? '');
	return withoutBinaryTail(inMinutes ? number.value / MINUTES_PER_DEGREE : number.value);
}

export function tidyAngle(value: number): string {
	return `${tidyQuantity('number', value)}°`;
}

function optional(kind: QuantityKind, atMost: number) {
	return text(30).superRefine((value, context) => {
		if (value === '') return;
		const checked = quantitySchema(kind, { atMost }).safeParse(value);
		if (!checked.success)
			context.addIssue({ code: 'custom', message: checked.error.issues[0]?.message ?? 'Enter a figure.' });
	});
}

/** What a person types stays text, so that nothing is lost or altered when it has to be corrected. */
export const sensorFormSchema = z
	.object({
		name: requiredText(100, 'Enter what you call the sensor, for example “Clamp 3” or “Coil, L1”.'),
		kind: z.enum(SENSOR_KINDS, 'Choose what kind of sensor it is.'),
		serialNumber: text(100),
		ratio: text(60),
		accuracyClass: text(20),
		ratioError: optional('percent', LARGEST_ERROR_PCT),
		phaseError: text(20).superRefine((value, context) => {
			if (value === '') return;
			const angle = parseAngle_deg(value);
			if (angle === null || angle < 0 || angle > LARGEST_ANGLE_DEG)
				context.addIssue({
					code: 'custom',
					message: `Enter an angle up to ${LARGEST_ANGLE_DEG}°, for example 0.5° or 30 min (minutes of arc).`
				});
		}),
		highestFrequency: optional('frequency', HIGHEST_FREQUENCY_HZ),
		notes: text(4000)
	})
	.superRefine((form, context) => {
		if (form.ratio === '') return;
		const parsed = parseSensorRatio(form.kind, form.ratio);
		if (!parsed.ok) context.addIssue({ code: 'custom', message: parsed.problem, path: ['ratio'] });
	});
export type SensorForm = z.infer<typeof sensorFormSchema>;

function figure(kind: QuantityKind, value: string): number | null {
	const parsed = value === '' ? null : parseQuantity(kind, value);
	return parsed?.ok ? withoutBinaryTail(parsed.value) : null;
}

/** Facts of a form that sensorFormSchema has accepted. */
export function sensorFactsFromForm(form: SensorForm): SensorFacts {
	const ratio = form.ratio === '' ? null : parseSensorRatio(form.kind, form.ratio);
	return {
		name: form.name,
		kind: form.kind,
		serialNumber: form.serialNumber,
		ratio: ratio?.ok ? ratio.value : null,
		accuracyClass: form.accuracyClass,
		ratioError_pct: figure('percent', form.ratioError),
		phaseError_deg: form.phaseError === '' ? null : parseAngle_deg(form.phaseError),
		highestFrequency_Hz: figure('frequency', form.highestFrequency),
		notes: form.notes
	};
}

export function tidyFrequency(value_Hz: number): string {
	return value_Hz >= 1000
		? `${tidyQuantity('number', value_Hz / 1000)} kHz`
		: `${tidyQuantity('number', value_Hz)} Hz`;
}

export function sensorFormFromFacts(facts: SensorFacts): SensorForm {
	return {
		name: facts.name,
		kind: facts.kind,
		serialNumber: facts.serialNumber,
		ratio: facts.ratio === null ? '' : formatSensorRatio(facts.kind, facts.ratio),
		accuracyClass: facts.accuracyClass,
		ratioError: facts.ratioError_pct === null ? '' : tidyQuantity('percent', facts.ratioError_pct),
		phaseError: facts.phaseError_deg === null ? '' : tidyAngle(facts.phaseError_deg),
		highestFrequency: facts.highestFrequency_Hz === null ? '' : tidyFrequency(facts.highestFrequency_Hz),
		notes: facts.notes
	};
}

export const EMPTY_SENSOR: SensorForm = {
	name: '',
	kind: 'clamp',
	serialNumber: '',
	ratio: '',
	accuracyClass: '',
	ratioError: '',
	phaseError: '',
	highestFrequency: '',
	notes: ''
};
