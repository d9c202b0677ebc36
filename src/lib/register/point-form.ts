import { z } from 'zod';
import { quantitySchema, type QuantityKind, type QuantitySchemaOptions } from '../units/quantity-input';
import { requiredText, text } from './form-text';
import { PHASE_PRESET_KEYS } from './phase-name-presets';
import { parseRatio, type RatioKind } from './ratio-input';

/** Months a demand current is the mean of. */
export const MONTHS = 12;

const typed = z.string().trim().max(60, 'Shorten this to 60 characters.');

/**
 * The point's form: what a person types stays text, so that nothing is lost or altered when it has to be corrected.
 * point-form-facts.ts turns a checked form into facts and facts into a form.
 */
const fields = z.object({
	name: requiredText(200, 'Enter the name of the point, for example “Main switchboard, incomer 1”.'),
	kind: z.enum(['pcc', 'in-plant']),
	system: z.enum(['four-wire', 'three-wire', 'split-phase', 'single-phase']),
	nominalVoltage: typed,
	nominalFrequency: z.enum(['50', '60']),
	demandMethod: z.enum(['entered', 'monthly', 'unknown']),
	demandCurrent: typed,
	demandQuantity: z.enum(['active', 'apparent']),
	monthlyDemands: z.array(typed).length(MONTHS),
	powerFactor: typed,
	demandSource: text(200),
	shortCircuitMethod: z.enum(['current', 'fault-level', 'transformer', 'unknown']),
	shortCircuitCurrent: typed,
	faultLevel: typed,
	transformerRating: typed,
	transformerImpedance: typed,
	upstreamFaultLevel: typed,
	shortCircuitSource: text(200),
	phasePreset: z.enum(PHASE_PRESET_KEYS),
	phaseL1: typed,
	phaseL2: typed,
	phaseL3: typed,
	phaseN: typed,
	currentRatio: typed,
	voltageRatio: typed,
	/** Id of a limit set, or empty. */
	limitSetId: z.string().regex(/^\d*$/, 'Choose a limit set from the list.'),
	limitSetReason: text(500),
	notes: text(4000)
});

export type PointForm = z.infer<typeof fields>;
type Field = keyof PointForm;
type Refuse = (message: string, ...path: (Field | number)[]) => void;

/** Bounds that catch a wrong unit rather than an unusual plant. Base units. */
export const QUANTITY_BOUNDS = {
	nominalVoltage: { above: 0, atMost: 1.2e6 },
	current: { above: 0, atMost: 1e6 },
	demand: { above: 0, atMost: 1e10 },
	powerFactor: { above: 0, atMost: 1 },
	faultLevel: { above: 0, atMost: 1e12 },
	impedance: { above: 0, atMost: 100 }
} as const satisfies Record<string, QuantitySchemaOptions>;

function refuseQuantity(
	refuse: Refuse,
	kind: QuantityKind,
	bounds: QuantitySchemaOptions,
	value: string,
	...path: (Field | number)[]
): void {
	const checked = quantitySchema(kind, bounds).safeParse(value);
	if (!checked.success) refuse(checked.error.issues[0]?.message ?? 'Enter a figure.', ...path);
}

function refuseRatio(refuse: Refuse, kind: RatioKind, value: string, field: Field): void {
	if (value === '') return;
	const parsed = parseRatio(kind, value);
	if (!parsed.ok) refuse(parsed.problem, field);
}

function checkDemand(form: PointForm, refuse: Refuse): void {
	if (form.demandMethod === 'entered')
		refuseQuantity(refuse, 'current', QUANTITY_BOUNDS.current, form.demandCurrent, 'demandCurrent');
	if (form.demandMethod !== 'monthly') return;
	const kind = form.demandQuantity === 'active' ? 'active-power' : 'apparent-power';
	form.monthlyDemands.forEach((month, i) => {
		if (month !== '') refuseQuantity(refuse, kind, QUANTITY_BOUNDS.demand, month, 'monthlyDemands', i);
	});
	if (form.monthlyDemands.every((month) => month === ''))
		refuse('Enter the maximum demand of each month; at least one is needed.', 'monthlyDemands', 0);
	if (form.demandQuantity === 'active')
		refuseQuantity(refuse, 'number', QUANTITY_BOUNDS.powerFactor, form.powerFactor, 'powerFactor');
}

function checkShortCircuit(form: PointForm, refuse: Refuse): void {
	switch (form.shortCircuitMethod) {
		case 'unknown':
			return;
		case 'current':
			return refuseQuantity(
				refuse,
				'current',
				QUANTITY_BOUNDS.current,
				form.shortCircuitCurrent,
				'shortCircuitCurrent'
			);
		case 'fault-level':
			return refuseQuantity(refuse, 'fault-level', QUANTITY_BOUNDS.faultLevel, form.faultLevel, 'faultLevel');
		case 'transformer':
			refuseQuantity(
				refuse,
				'apparent-power',
				QUANTITY_BOUNDS.demand,
				form.transformerRating,
				'transformerRating'
			);
			refuseQuantity(
				refuse,
				'percent',
				QUANTITY_BOUNDS.impedance,
				form.transformerImpedance,
				'transformerImpedance'
			);
			if (form.upstreamFaultLevel !== '')
				refuseQuantity(
					refuse,
					'fault-level',
					QUANTITY_BOUNDS.faultLevel,
					form.upstreamFaultLevel,
					'upstreamFaultLevel'
				);
	}
}

function checkPhaseNames(form: PointForm, refuse: Refuse): void {
	if (form.phasePreset !== 'own') return;
	const names = ['phaseL1', 'phaseL2', 'phaseL3', 'phaseN'] as const;
	for (const field of names) {
		if (form[field] === '') refuse('Enter the name used on site.', field);
		else if (names.some((other) => other !== field && form[other] === form[field]))
			refuse('Each conductor needs a name of its own.', field);
	}
}

export const pointFormSchema = fields.superRefine((form, context) => {
	const refuse: Refuse = (message, ...path) => context.addIssue({ code: 'custom', message, path });
	refuseQuantity(refuse, 'voltage', QUANTITY_BOUNDS.nominalVoltage, form.nominalVoltage, 'nominalVoltage');
	checkDemand(form, refuse);
	checkShortCircuit(form, refuse);
	checkPhaseNames(form, refuse);
	refuseRatio(refuse, 'current', form.currentRatio, 'currentRatio');
	refuseRatio(refuse, 'voltage', form.voltageRatio, 'voltageRatio');
});
