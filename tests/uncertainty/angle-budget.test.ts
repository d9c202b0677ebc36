import { describe, expect, it } from 'vitest';
import { angleBudget } from '$lib/uncertainty/angle-budget';
import { chainOf, type ChainFacts } from '$lib/uncertainty/survey-chain';
import { seededRandom } from '$lib/synthesis/waveform-random';
import {
	currentTransformerDisplacement_min,
	voltageTransformerDisplacement_min
} from '$lib/uncertainty/transducer-limits';

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

// IEC 61869-2, table of ratio error and phase displacement (public listings): minutes at 5, 20 and 100 % of rated current.
describe('phase displacement of current transformers', () => {
	it.each([
		[0.1, [15, 8, 5]],
		[0.2, [30, 15, 10]],
		[0.5, [90, 45, 30]],
		[1, [180, 90, 60]]
	] as const)('class %d', (error, minutes) => {
		expect([5, 20, 100].map((load) => currentTransformerDisplacement_min(error, load))).toEqual(minutes);
		expect(currentTransformerDisplacement_min(error, null)).toBe(minutes[0]);
		expect(currentTransformerDisplacement_min(error, 120)).toBe(minutes[2]);
		expect(currentTransformerDisplacement_min(error, 60)).toBeCloseTo((minutes[1] + minutes[2]) / 2, 12);
	});

	it('is not bounded in classes 3 and 5', () => {
		expect(currentTransformerDisplacement_min(3, 100)).toBeNaN();
		expect(currentTransformerDisplacement_min(5, null)).toBeNaN();
	});

	// IEEE C57.13, parallelograms (from memory): class 0.3 about 15 minutes at rated current, 30 at a tenth of it.
	it('class 0.3 of IEEE C57.13', () => {
		expect(Math.abs(currentTransformerDisplacement_min(0.3, 100) - 15)).toBeLessThan(1);
		expect(Math.abs(currentTransformerDisplacement_min(0.3, 10) - 30)).toBeLessThan(2);
	});
});

// IEC 61869-3, table of voltage error and phase displacement (public listings).
it.each([
	[0.1, 5],
	[0.2, 10],
	[0.5, 20],
	[1, 40],
	[3, NaN]
])('a voltage transformer of class %d is displaced by at most %d minutes', (error, minutes) => {
	expect(voltageTransformerDisplacement_min(error)).toBe(minutes);
});

describe('angle between voltage and current', () => {
	// IEC 61000-4-7, class I (from memory): 1° per order between channels; u = a/√3: JCGM 100:2008, 4.3.7.
	it('measured directly is that of the recorder', () => {
		expect(angleBudget(chain(), 7, 100).U).toBeCloseTo((2 * 7) / Math.sqrt(3), 12);
		expect(angleBudget(chain({ instrumentClass: null }), 7, 100).U).toBeCloseTo((2 * 14) / Math.sqrt(3), 12);
	});

	it('through transformers of class 0.5 combines 30 and 20 minutes with the recorder', () => {
		const facts = {
			currentTransformerPrimary_A: 1000,
			currentTransformerClass: 0.5,
			voltageTransformerPrimary_V: 11_000,
			voltageTransformerClass: 0.5
		};
		const first = angleBudget(chain(facts), 1, 1000);
		expect(first.U).toBeCloseTo(2 * Math.sqrt((1 + 0.5 ** 2 + (1 / 3) ** 2) / 3), 12);
		expect(first.contributions.map(({ source }) => source)).toEqual([
			'instrument-angle',
			'voltage-transformer-angle',
			'current-transformer-angle'
		]);
		// All three are delays at rated load: eleven times as much at the 11th order.
		expect(angleBudget(chain(facts), 11, 1000).U).toBeCloseTo(11 * first.U!, 10);
	});

	it('adds what a current transformer errs at little load once, not with every order', () => {
		const facts = { currentTransformerPrimary_A: 1000, currentTransformerClass: 0.5 };
		const bound = (order: number) =>
			angleBudget(chain(facts), order, 50).contributions.find(
				({ source }) => source === 'current-transformer-angle'
			)!.stated;
		expect(bound(1)).toBeCloseTo(1.5, 12);
		expect(bound(5)).toBeCloseTo(1.5 + 4 * 0.5, 12);
	});

	it('takes a sensor for a transformer of its ratio error, also where that is no class', () => {
		const by = (facts: Partial<ChainFacts>) => angleBudget(chain(facts), 3, null).contributions[1]!;
		expect(by({ currentSensorError_pct: 0.5 })).toMatchObject({
			source: 'current-sensor-angle',
			stated: 1.5
		});
		expect(by({ currentSensorError_pct: 3 }).stated).toBeCloseTo(9, 12);
		expect(by({ voltageSensorError_pct: 0.3 }).stated).toBeCloseTo((3 * 0.3 * 40) / 60, 12);
	});

	// With errors drawn from the stated bounds the truth is its own yardstick.
	it('holds the true angle in 95 % of the cases, so that a wrong side is told in one of forty at most', () => {
		const facts = {
			currentTransformerPrimary_A: 1000,
			voltageTransformerPrimary_V: 11_000,
			voltageTransformerClass: 1
		};
		for (const order of [1, 5, 13]) {
			const budget = angleBudget(chain(facts), order, 600);
			const bounds = budget.contributions.map(({ stated }) => stated);
			expect(bounds).toHaveLength(3);
			const { uniform } = seededRandom(order);
			const draws = 40_000;
			let inside = 0;
			let wrong = 0;
			for (let i = 0; i < draws; i++) {
				const error = bounds.reduce((sum, bound) => sum + bound * (2 * uniform() - 1), 0);
				if (Math.abs(error) <= budget.U!) inside += 1;
				// The worst case: an angle a hair beyond 90°, which is the other side.
				if (error < -budget.U!) wrong += 1;
			}
			expect(Math.abs(inside / draws - 0.95)).toBeLessThan(0.015);
			expect(wrong / draws).toBeLessThan(0.025);
		}
	});

	// IEC TR 61869-103 (as cited in the trade, from memory): inductive medium-voltage transformers to about 1 kHz.
	it('is not known beyond the reach of a transformer, nor where its class bounds none', () => {
		const inductive = chain({ voltageTransformerPrimary_V: 11_000 });
		expect(angleBudget(inductive, 20, null).U).not.toBeNull();
		expect(angleBudget(inductive, 21, null)).toMatchObject({
			U: null,
			notKnown: ['voltage-transformer-angle']
		});
		const third = chain({ currentTransformerPrimary_A: 100, currentTransformerClass: 3 });
		expect(angleBudget(third, 1, 100)).toMatchObject({ U: null, notKnown: ['current-transformer-angle'] });
	});
});
