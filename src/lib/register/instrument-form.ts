import { z } from 'zod';
import { parseQuantity, quantitySchema } from '../units/quantity-input';
import { requiredText, text } from './form-text';
import { HARMONIC_CLASSES, type InputFacts, type InstrumentFacts } from './instrument-facts';
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

/** More inputs than any recorder has. */
export const MOST_INPUTS = 64;
const MOST_BITS = 32;

const inputSchema = z
	.object({
		name: requiredText(40, 'Enter the name that is printed at the input, for example “I1”.'),
		quantity: z.enum(['voltage', 'current']),
		range: text(20),
		resolutionBits: text(10),
		/** Id of a sensor, or empty. */
		sensorId: text(60)
	})
	.superRefine((input, context) => {
		const refuse = (path: string, message: string) =>
			context.addIssue({ code: 'custom', path: [path], message });
		// At a current input amperes or, behind a sensor that gives volts, volts.
		if (input.range !== '' && readRange(input.quantity, input.range) === null)
			refuse(
				'range',
				input.quantity === 'voltage'
					? 'Enter the greatest rms voltage at the input, for example 1000 V.'
					: 'Enter the greatest rms value at the input, for example 5 A, or 1 V behind a clamp.'
			);
		if (input.resolutionBits !== '' && readBits(input.resolutionBits) === null)
			refuse('resolutionBits', `Enter a whole number of bits up to ${MOST_BITS}, for example 16.`);
	});
export type InputForm = z.infer<typeof inputSchema>;

/** A current input behind a sensor that gives volts takes volts. */
function rangeUnit(quantity: InputForm['quantity'], range: string): 'A' | 'V' {
	return quantity === 'voltage' || /v(olts?)?$/i.test(range.trim()) ? 'V' : 'A';
}

function readRange(quantity: InputForm['quantity'], range: string): number | null {
	const parsed = parseQuantity(rangeUnit(quantity, range) === 'V' ? 'voltage' : 'current', range);
	return parsed.ok && parsed.value > 0 ? withoutBinaryTail(parsed.value) : null;
}

function readBits(value: string): number | null {
	const parsed = /^(\d+)\s*(?:bits?)?$/i.exec(value.trim())?.[1];
	const bits = parsed === undefined ? 0 : Number(parsed);
	return bits >= 4 && bits <= MOST_BITS ? bits : null;
}

export const EMPTY_INPUT: InputForm = {
	name: '',
	quantity: 'voltage',
	range: '',
	resolutionBits: '',
	sensorId: ''
};

export const instrumentFormSchema = z.object({
	name: requiredText(100, 'Enter what you call the instrument, for example “Recorder 2”.'),
	model: text(100),
	serialNumber: text(100),
	harmonicClass: z.enum(HARMONIC_CLASSES),
	channels: text(200),
	sensors: text(300),
	currentSensorError: errorText,
	voltageSensorError: errorText,
	inputs: z
		.array(inputSchema)
		.max(MOST_INPUTS, `An instrument has at most ${MOST_INPUTS} inputs here.`)
		.superRefine((inputs, context) => {
			inputs.forEach((input, i) => {
				const same = inputs.findIndex((other) => other.name.toLowerCase() === input.name.toLowerCase());
				if (input.name !== '' && same < i)
					context.addIssue({
						code: 'custom',
						path: [i, 'name'],
						message: `Input ${same + 1} has this name already. Each input needs a name of its own.`
					});
			});
		}),
	notes: text(4000)
});
export type InstrumentForm = z.infer<typeof instrumentFormSchema>;

function readError_pct(value: string): number | null {
	const parsed = parseQuantity('percent', value);
	return parsed.ok ? withoutBinaryTail(parsed.value) : null;
}

/** Facts of a form that instrumentFormSchema has accepted. */
export function instrumentFactsFromForm(form: InstrumentForm): InstrumentFacts {
	const { currentSensorError, voltageSensorError, inputs, ...rest } = form;
	return {
		...rest,
		inputs: inputs.map(({ name, quantity, range, resolutionBits, sensorId }) => ({
			name,
			quantity,
			rangeRms: readRange(quantity, range),
			rangeUnit: rangeUnit(quantity, range),
			resolution_bits: readBits(resolutionBits),
			sensorId: sensorId === '' ? null : sensorId
		})),
		currentSensorError_pct: readError_pct(currentSensorError),
		voltageSensorError_pct: readError_pct(voltageSensorError)
	};
}

function shownRange({ rangeRms, rangeUnit }: InputFacts): string {
	return rangeRms === null ? '' : tidyQuantity(rangeUnit === 'V' ? 'voltage' : 'current', rangeRms);
}

export function instrumentFormFromFacts(facts: InstrumentFacts): InstrumentForm {
	const { currentSensorError_pct, voltageSensorError_pct, inputs, ...rest } = facts;
	const shown = (value: number | null) => (value === null ? '' : tidyQuantity('percent', value));
	return {
		...rest,
		inputs: inputs.map((input) => ({
			name: input.name,
			quantity: input.quantity,
			range: shownRange(input),
			resolutionBits: input.resolution_bits === null ? '' : String(input.resolution_bits),
			sensorId: input.sensorId ?? ''
		})),
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
	inputs: [],
	notes: ''
};
