import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { DEFAULT_PHASE_NAMES } from '$lib/recording/phase';
import type { PointFacts } from '$lib/register/point-facts';
import { pointFormSchema, type PointForm } from '$lib/register/point-form';
import { emptyPointForm, pointFactsFromForm, pointFormFromFacts } from '$lib/register/point-form-facts';

const filled: PointForm = {
	...emptyPointForm({ phaseNames: DEFAULT_PHASE_NAMES, country: 'US' }),
	name: 'Main switchboard',
	nominalVoltage: '480',
	demandCurrent: '1284 A',
	shortCircuitMethod: 'transformer',
	transformerRating: '1500 kVA',
	transformerImpedance: '5.75 %'
};

function errorsOf(form: PointForm): Record<string, string> {
	const checked = pointFormSchema.safeParse(form);
	if (checked.success) return {};
	return Object.fromEntries(checked.error.issues.map((issue) => [issue.path.join('.'), issue.message]));
}

describe('the form of a point', () => {
	it('accepts a filled form and keeps quantities in base units', () => {
		expect(errorsOf(filled)).toEqual({});
		const facts = pointFactsFromForm(filled);
		expect(facts.nominalVoltage_V).toBe(480);
		expect(facts.nominalFrequency_Hz).toBe(60);
		expect(facts.demand).toEqual({ method: 'entered', demandCurrent_A: 1284, source: '' });
		expect(facts.shortCircuit).toEqual({
			method: 'transformer',
			rating_VA: 1_500_000,
			impedance_pct: 5.75,
			upstreamFaultLevel_VA: null,
			source: ''
		});
	});

	it('names the field and says what to enter', () => {
		const errors = errorsOf({
			...filled,
			name: '  ',
			nominalVoltage: '480 kW',
			demandCurrent: '',
			transformerImpedance: '0 %',
			currentRatio: '1600'
		});
		expect(Object.keys(errors).sort()).toEqual([
			'currentRatio',
			'demandCurrent',
			'name',
			'nominalVoltage',
			'transformerImpedance'
		]);
		expect(errors['nominalVoltage']).toContain('13.8 kV');
		expect(errors['currentRatio']).toContain('1600/5');
	});

	it('looks only at the fields of the way that was chosen', () => {
		expect(errorsOf({ ...filled, demandMethod: 'unknown', demandCurrent: 'no idea' })).toEqual({});
		expect(errorsOf({ ...filled, shortCircuitMethod: 'unknown', transformerRating: '?' })).toEqual({});
	});

	it('asks for a power factor with kW and none with kVA', () => {
		const monthlyDemands = Array<string>(12).fill('640');
		const monthly: PointForm = { ...filled, demandMethod: 'monthly', monthlyDemands };
		expect(Object.keys(errorsOf(monthly))).toEqual(['powerFactor']);
		expect(errorsOf({ ...monthly, powerFactor: '0.92' })).toEqual({});
		expect(Object.keys(errorsOf({ ...monthly, powerFactor: '1.2' }))).toEqual(['powerFactor']);
		expect(errorsOf({ ...monthly, demandQuantity: 'apparent' })).toEqual({});
	});

	it('keeps a missing month missing, not zero', () => {
		const monthlyDemands = ['640 kW', '', '655', ...Array<string>(9).fill('')];
		const form: PointForm = { ...filled, demandMethod: 'monthly', monthlyDemands, powerFactor: '0.9' };
		const { demand } = pointFactsFromForm(form);
		expect(demand.method === 'monthly' && demand.demands.slice(0, 3)).toEqual([640_000, null, 655_000]);
	});

	it('refuses two conductors of one name', () => {
		const own: PointForm = {
			...filled,
			phasePreset: 'own',
			phaseL1: 'X',
			phaseL2: 'X',
			phaseL3: 'Z',
			phaseN: 'N'
		};
		expect(Object.keys(errorsOf(own)).sort()).toEqual(['phaseL1', 'phaseL2']);
	});

	it('suggests 60 Hz where networks run at 60 Hz', () => {
		const phaseNames = DEFAULT_PHASE_NAMES;
		expect(emptyPointForm({ phaseNames, country: 'US' }).nominalFrequency).toBe('60');
		expect(emptyPointForm({ phaseNames, country: 'GB' }).nominalFrequency).toBe('50');
		expect(emptyPointForm({ phaseNames, country: null }).nominalFrequency).toBe('50');
	});
});

describe('facts and form of a point', () => {
	/** A figure of up to six significant digits, as people type them. */
	const typedFigure = (least: number, most: number) =>
		fc
			.tuple(fc.integer({ min: 1, max: 999_999 }), fc.integer({ min: -4, max: 12 }))
			.map(([digits, exponent]) => Number(`${digits}e${exponent}`))
			.filter((value) => value >= least && value <= most);
	const source = fc.constantFrom('', 'utility letter');
	const facts: fc.Arbitrary<PointFacts> = fc.record({
		name: fc.constant('Main switchboard'),
		kind: fc.constantFrom('pcc' as const, 'in-plant' as const),
		system: fc.constantFrom(
			'four-wire' as const,
			'three-wire' as const,
			'split-phase' as const,
			'single-phase' as const
		),
		nominalVoltage_V: typedFigure(1, 1.2e6),
		nominalFrequency_Hz: fc.constantFrom(50 as const, 60 as const),
		demand: fc.oneof(
			fc.constant({ method: 'unknown' as const }),
			fc.record({
				method: fc.constant('entered' as const),
				demandCurrent_A: typedFigure(0.001, 1e6),
				source
			}),
			fc.record({
				method: fc.constant('monthly' as const),
				quantity: fc.constant('active' as const),
				demands: fc
					.array(fc.option(typedFigure(1, 1e10)), { minLength: 12, maxLength: 12 })
					.filter((months) => months.some((month) => month !== null)),
				powerFactor: fc.integer({ min: 1, max: 1000 }).map((thousandths) => thousandths / 1000),
				source
			})
		),
		shortCircuit: fc.oneof(
			fc.constant({ method: 'unknown' as const }),
			fc.record({
				method: fc.constant('current' as const),
				shortCircuitCurrent_A: typedFigure(0.001, 1e6),
				source
			}),
			fc.record({ method: fc.constant('fault-level' as const), faultLevel_VA: typedFigure(1, 1e12), source }),
			fc.record({
				method: fc.constant('transformer' as const),
				rating_VA: typedFigure(1, 1e10),
				impedance_pct: typedFigure(0.01, 99),
				upstreamFaultLevel_VA: fc.option(typedFigure(1, 1e12)),
				source
			})
		),
		phaseNames: fc.constantFrom(
			{ L1: 'A', L2: 'B', L3: 'C', N: 'N' },
			{ L1: 'red', L2: 'white', L3: 'blue', N: 'black' }
		),
		currentTransformer: fc.constantFrom(
			null,
			{ primary: 1600, secondary: 5 },
			{ primary: 87.5, secondary: 1 }
		),
		voltageTransformer: fc.constantFrom(null, { primary: 14_400, secondary: 120 }),
		limitSetId: fc.constantFrom(null, 7),
		limitSetReason: source,
		notes: source
	});

	it('property: a form made of facts is accepted and gives the same facts back', () => {
		fc.assert(
			fc.property(facts, (given) => {
				const form = pointFormFromFacts(given);
				expect(errorsOf(form)).toEqual({});
				expect(pointFactsFromForm(form)).toEqual(given);
			}),
			{ seed: 20_260_319, numRuns: 500 }
		);
	});

	it('property: showing a form back and saving it again changes nothing', () => {
		fc.assert(
			fc.property(facts, (given) => {
				const once = pointFormFromFacts(given);
				expect(pointFormFromFacts(pointFactsFromForm(once))).toEqual(once);
			}),
			{ seed: 20_260_320, numRuns: 200 }
		);
	});
});
