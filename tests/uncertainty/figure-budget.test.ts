import { describe, expect, it } from 'vitest';
import { figureBudget, type Figure, type FigureEvidence } from '$lib/uncertainty/figure-budget';
import { chainOf, type ChainFacts } from '$lib/uncertainty/survey-chain';
import { currentTransformerError_pct, responseError_pct } from '$lib/uncertainty/transducer-limits';

function chain(facts: Partial<ChainFacts> = {}) {
	return chainOf({
		nominalFrequency_Hz: 50,
		instrumentClass: 'I',
		voltageSensorError_pct: null,
		currentSensorError_pct: null,
		voltageTransformerPrimary_V: null,
		currentTransformerPrimary_A: null,
		...facts
	});
}

function figure(
	quantity: Figure['quantity'],
	order: number,
	value_pct: number,
	evidence: Partial<FigureEvidence> = {}
): Figure {
	return {
		quantity,
		orders: { from: order, to: order },
		value_pct,
		basis: 'agreed',
		evidence: { fullScale: null, load_A: null, spread: null, composition_pct: null, ...evidence }
	};
}

// IEC 61000-4-7:2002+A1:2008, table 1 (from memory); u = a/√3: JCGM 100:2008, 4.3.7.
describe('recorder by its class', () => {
	it.each([
		['I', 0.1, 0.05],
		['I', 1, 0.05],
		['I', 4, 0.2],
		['II', 1, 0.15],
		['II', 3, 0.15],
		['II', 4, 0.2]
	] as const)('class %s, voltage of %d %%: bound %d points', (instrumentClass, value, bound) => {
		const { U } = figureBudget(chain({ instrumentClass }), figure('voltage', 5, value));
		expect(U).toBeCloseTo((2 * bound) / Math.sqrt(3), 12);
	});

	it('has a floor for currents in percent of the range, whatever 100 % stands for', () => {
		const facts = { currentTransformerPrimary_A: 2000, currentTransformerClass: 0 } as const;
		const at = (value: number) =>
			figureBudget(chain(facts), figure('current', 1, value, { fullScale: 1000, load_A: 2000 })).U;
		// 0.15 % of 2000 A is 3 A, 0.3 % of a demand current of 1000 A; 5 % of 10 % is more.
		expect(at(1)).toBeCloseTo((2 * 0.3) / Math.sqrt(3), 10);
		expect(at(10)).toBeCloseTo((2 * 0.5) / Math.sqrt(3), 10);
	});

	it('takes class II where none is stated', () => {
		const unknown = figureBudget(chain({ instrumentClass: null }), figure('voltage', 5, 1));
		expect(unknown.U).toBeCloseTo(0.3 / Math.sqrt(3), 12);
	});
});

describe('recorder by its certificate', () => {
	const certificate = [
		{ quantity: 'voltage', fromOrder: 2, toOrder: 25, expanded_pctOfReading: 0.9, coverageFactor: 3 }
	] as const;
	const calibrated = chain({ certificate: [...certificate] });

	it('divides by the printed factor, in its band of orders only', () => {
		const inside = figureBudget(calibrated, figure('voltage', 25, 10));
		expect(inside.U).toBeCloseTo(2 * 0.03, 12);
		expect(inside.contributions[0]).toMatchObject({ source: 'instrument-certificate', divisor: 3 });
		expect(figureBudget(calibrated, figure('voltage', 26, 10)).contributions[0]?.source).toBe(
			'instrument-class'
		);
	});
});

// IEC 61869-2, classes 0.5 and 1 (public listing of the table).
describe('current transformer', () => {
	it.each([
		[0.5, 120, 0.5],
		[0.5, 100, 0.5],
		[0.5, 20, 0.75],
		[0.5, 5, 1.5],
		[1, 5, 3],
		[3, 60, 3],
		[0.5, 60, 0.625],
		[0.5, 2.5, 3]
	])('class %d at %d %% of rated current errs by at most %d %%', (error, load, expected) => {
		expect(currentTransformerError_pct(error, load)).toBeCloseTo(expected, 12);
	});

	it('is taken at its lowest load where the load is not known', () => {
		expect(currentTransformerError_pct(0.2, null)).toBe(0.75);
	});

	it('errs more at high orders, and more where less flows', () => {
		const facts = { currentTransformerPrimary_A: 1000, currentTransformerClass: 0.5 };
		const U = (order: number, load_A: number) =>
			figureBudget(chain(facts), figure('current', order, 10, { load_A })).U!;
		expect(U(49, 1000)).toBeGreaterThan(U(5, 1000));
		expect(U(5, 50)).toBeGreaterThan(U(5, 1000));
		// By hand at order 50: bounds of 5, 0.5 and 3 % of reading.
		expect(U(50, 1000)).toBeCloseTo((2 * Math.sqrt((25 + 0.25 + 9) / 3)) / 10, 10);
	});
});

// IEC TR 61869-103 (from memory): inductive medium-voltage transformers to about 1 kHz.
describe('voltage transformer', () => {
	const medium = chain({ voltageTransformerPrimary_V: 11_000 });

	it('of medium voltage is not known above 1 kHz', () => {
		expect(figureBudget(medium, figure('voltage', 20, 3)).U).not.toBeNull();
		const beyond = figureBudget(medium, figure('voltage', 21, 3));
		expect(beyond).toMatchObject({ U: null, notKnown: ['transformer-response'] });
		expect(beyond.knownPart).toBeGreaterThan(0);
		expect(responseError_pct({ kind: 'inductive-voltage-transformer' }, 17, 60)).toBeNull();
	});

	it('of low voltage carries every order', () => {
		const low = chain({ voltageTransformerPrimary_V: 690 });
		expect(figureBudget(low, figure('voltage', 49, 3)).U).not.toBeNull();
	});

	it('leaves a total known as long as little of it lies beyond its reach', () => {
		const total = (far: number): Figure => ({
			...figure('voltage', 2, Math.hypot(4, far)),
			orders: { from: 2, to: 25 },
			evidence: {
				...figure('voltage', 2, 1).evidence,
				composition_pct: Array.from({ length: 24 }, (_, i) => (i === 3 ? 4 : i === 23 ? far : 0))
			}
		});
		const little = figureBudget(medium, total(0.4));
		const line = little.contributions.find((one) => one.source === 'transformer-beyond-reach');
		// An error of 100 % in 0.4 of the root of 4² + 0.4².
		expect(line?.stated).toBeCloseTo((100 * 0.16) / 16.16, 10);
		expect(little.U).not.toBeNull();
		expect(figureBudget(medium, total(1)).U).toBeNull();
	});
});

describe('a total', () => {
	const composition_pct = [0, 3, 0, 4];
	const total: Figure = {
		...figure('voltage', 2, 5, { composition_pct }),
		orders: { from: 2, to: 5 }
	};

	it('adds the bounds of its orders as if all erred the same way', () => {
		// Each order by 5 % of its reading, so the sum by 5 % of its own.
		expect(figureBudget(chain(), total).U).toBeCloseTo((2 * 0.25) / Math.sqrt(3), 12);
	});

	it('weighs the growth with the order by its spectrum', () => {
		const divider = chain({ voltageSensorError_pct: 0, voltageSensorKind: 'voltage-divider' });
		const response = figureBudget(divider, total).contributions.find(
			(one) => one.source === 'sensor-response'
		);
		// Bounds of 2/49 % and 4/49 % of 3 and 4, weights 3/5 and 4/5.
		const bound = (0.6 * 3 * 2 + 0.8 * 4 * 4) / 49 / 100;
		expect(response?.u).toBeCloseTo(bound / Math.sqrt(3), 12);
	});

	it('is taken to lie at its highest order when its spectrum is not known', () => {
		const facts = chain({ voltageTransformerPrimary_V: 11_000 });
		const blind = {
			...total,
			orders: { from: 2, to: 50 },
			evidence: { ...total.evidence, composition_pct: null }
		};
		expect(figureBudget(facts, blind).U).toBeNull();
	});
});

describe('the rest of the budget', () => {
	it('counts the error of a measured fundamental, and none of an agreed basis', () => {
		const lines = (basis: Figure['basis']) =>
			figureBudget(chain(), { ...figure('voltage', 5, 4), basis }).contributions.map((one) => one.source);
		expect(lines('agreed')).toEqual(['instrument-class']);
		expect(lines('measured-fundamental')).toEqual(['instrument-class', 'basis']);
	});

	it('spreads the rounding of the samples over lines and windows', () => {
		const resolution = { step_V: 0.5, step_A: null, samplesPerWindow: 2500, windowsPerValue: 4 };
		const lines = figureBudget(chain({ resolution }), figure('voltage', 5, 4, { fullScale: 250 }));
		// 0.5 V of 250 V is 0.2 %; ÷ √12 ÷ √(2500·4).
		expect(lines.contributions[1]?.u).toBeCloseTo(0.2 / Math.sqrt(12) / 100, 12);
	});

	it('takes the spread that the readings show, with its degrees of freedom', () => {
		const spread = { source: 'window-noise', u: 0.3, degreesOfFreedom: 4 } as const;
		const budget = figureBudget(chain(), figure('voltage', 5, 4, { spread }));
		expect(budget.contributions[1]).toMatchObject({ type: 'A', u: 0.3, degreesOfFreedom: 4 });
		expect(budget.effectiveDegreesOfFreedom).toBeCloseTo((budget.u / 0.3) ** 4 * 4, 10);
	});

	it('keeps the floor of the class for a reading of nothing', () => {
		expect(figureBudget(chain(), figure('voltage', 5, 0)).U).toBeCloseTo(0.1 / Math.sqrt(3), 12);
	});
});
