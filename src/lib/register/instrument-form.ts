import { z } from 'zod';
import { parseQuantity, quantitySchema } from '../units/quantity-input';
import { requiredText, text } from './form-text';
import { HARMONIC_CLASSES, type InstrumentFacts } from './instrument-facts';
import { tidyQuantity, withoutBinaryTail } from './tidy-quantity';

/** A sensor that errs more than this is not one that harmonics are measured with; the figure has a wrong unit. */
const LARGEST_ERROR_PCT = 20;

/** Percent as typed; empty = not stated. */
const errorText = text(20).superRefine((value, context) => {
	if (value === '') return;
	const checked = quantitySchema('percent', { atMost: LARGEST_ERROR_PCT }).safeParse(value);
	if (!checked.success)
		context.addIssue({ code: 'custom', message: checked.error.issues[0]?.message ?? 'Enter a percentage.' });
});

export const instrumentFormSchema = z.object({
	name: requiredText(100, 'Enter what you call the instrument, for example “Recorder 2”.'),
	model: text(100),
	serialNumber: text(100),
	harmonicClass: z.enum(HARMONIC_CLASSES),
	channels: text(200),
	sensors: text(300),
	currentSensorError: errorText,
	voltageSensorError: errorText,
	notes: text(4000)
});
export type InstrumentForm = z.infer<typeof instrumentFormSchema>;

function readError_pct(value: string): number | null {
	const parsed = parseQuantity('percent', value);
	return parsed.ok ? withoutBinaryTail(parsed.value) : null;
}

/** Facts of a form that instrumentFormSchema has accepted. */
export function instrumentFactsFromForm(form: InstrumentForm): InstrumentFacts {
	const { currentSensorError, voltageSensorError, ...rest } = form;
	return {
		...rest,
		currentSensorError_pct: readError_pct(currentSensorError),
		voltageSensorError_pct: readError_pct(voltageSensorError)
	};
}

export function instrumentFormFromFacts(facts: InstrumentFacts): InstrumentForm {
	const { currentSensorError_pct, voltageSensorError_pct, ...rest } = facts;
	const shown = (value: number | null) => (value === null ? '' : tidyQuantity('percent', value));
	return {
		...rest,
		currentSensorError: shown(currentSensorError_pct),
		voltageSensorError: shown(voltageSensorError_pct)
	};
}

/** A new instrument: nothing is known of its class until its data sheet is read. */
export const EMPTY_INSTRUMENT: InstrumentForm = {
	name: '',
	model: '',
	serialNumber: '',
	harmonicClass: 'unknown',
	channels: '',
	sensors: '',
	currentSensorError: '',
	voltageSensorError: '',
	notes: ''
};
