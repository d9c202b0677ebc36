import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { measureMoving, movingCases } from '$lib/accuracy/moving-signals';
import { FUNDAMENTALS_HZ } from '$lib/accuracy/steady-grid';
import {
	measureSteady,
	MOST_BEYOND_ROUNDING,
	STEADY_LIMITS,
	type SteadyCase
} from '$lib/accuracy/steady-tones';
import { measureState, STATE_LIMITS, TESTING_STATES, unbalanceOf } from '$lib/accuracy/testing-states';
import { measureStep, STEP_CASES } from '$lib/accuracy/voltage-step';
import { ENGINE_VERSION } from '$lib/harmonics/engine-version';
import { DOCUMENT, headerOf } from '../../scripts/accuracy/document';

// A part of the experiments behind docs/accuracy.md. Limits: the engine's own promises for steady signals; a tenth of
// class I of IEC 61000-4-7:2002+A1:2008 and of class A of IEC 61000-4-30:2015 for the rest (both from memory).
const RATES_HZ = [6400, 7680, 12_500, 12_800, 30_000, 44_100, 100_000];
const grid = (bits: number | null, keepEvery: number): SteadyCase[] =>
	([50, 60] as const)
		.flatMap((nominalFrequency_Hz) =>
			FUNDAMENTALS_HZ[nominalFrequency_Hz].flatMap((frequency_Hz) =>
				[128 * frequency_Hz, ...RATES_HZ].map((samplingRate_Hz) => ({
					nominalFrequency_Hz,
					frequency_Hz,
					samplingRate_Hz,
					bits
				}))
			)
		)
		.filter(({ samplingRate_Hz, frequency_Hz }) => samplingRate_Hz / frequency_Hz > 127.999)
		.filter((_, i) => i % keepEvery === 0);

describe('steady tones with all digits', () => {
	it.each(grid(null, 3))('$frequency_Hz Hz at $samplingRate_Hz S/s', (steady) => {
		const errors = measureSteady(steady);
		expect(errors.highestOrder).toBe(50);
		expect(errors.windowCount).toBeGreaterThanOrEqual(2);
		expect(errors.magnitude_pct).toBeLessThan(STEADY_LIMITS.magnitude_pct);
		expect(errors.phaseOfFirst_deg).toBeLessThan(STEADY_LIMITS.phaseOfFirst_deg);
		expect(errors.phaseOfHighest_deg).toBeLessThan(STEADY_LIMITS.phaseOfHighest_deg);
	});
});

describe('steady tones of 16 bits', () => {
	it.each(grid(16, 9))(
		'$frequency_Hz Hz at $samplingRate_Hz S/s: no more than rounding explains',
		(steady) => {
			const { rmsError_pct, explained_pct } = measureSteady(steady);
			expect(explained_pct).toBeGreaterThan(0);
			expect(rmsError_pct / explained_pct).toBeLessThan(MOST_BEYOND_ROUNDING);
		}
	);
});

const MOVING = movingCases().filter(({ title }) => /^(ramp|amplitude)|order (1|49) . (6|12) /.test(title));

describe('moving signals against the ideal window', () => {
	it.each(MOVING)('$nominalFrequency_Hz Hz, $title', (moving) => {
		const errors = measureMoving(moving);
		expect(errors.windowCount).toBeGreaterThanOrEqual(14);
		expect(errors.length_pct).toBeLessThan(0.03);
		expect(errors.subgroupUse).toBeLessThan(1);
		expect(errors.componentUse).toBeLessThan(1);
	});
});

describe.each([50, 60] as const)(
	'testing states of IEC 62586-2 (from memory) at %i Hz',
	(nominalFrequency_Hz) => {
		it.each(TESTING_STATES)('$title', (state) => {
			const errors = measureState(state, nominalFrequency_Hz);
			expect(errors.frequency_Hz).toBeLessThan(STATE_LIMITS.frequency_Hz);
			expect(errors.voltage_pct).toBeLessThan(STATE_LIMITS.voltage_pct);
			expect(errors.u2_pct).toBeLessThan(STATE_LIMITS.unbalance_pct);
			expect(errors.u0_pct).toBeLessThan(STATE_LIMITS.unbalance_pct);
			expect(errors.harmonicUse).toBeLessThan(1);
			expect(errors.putInUse).toBeLessThan(1);
		});
	}
);

describe('unbalance of the testing states', () => {
	// 5.05 % and 4.95 %: IEC 61000-4-30 / IEC 62586-2, testing states 2 and 3 (from memory).
	it.each([
		[[73, 80, 87] as const, 5.05],
		[[152, 140, 128] as const, 4.95]
	])('%j is %d %%', (levels, unbalance_pct) => {
		expect(Math.abs(unbalanceOf(levels) - unbalance_pct)).toBeLessThan(0.005);
	});
});

describe('steps of the voltage', () => {
	it.each(STEP_CASES)('$nominalFrequency_Hz Hz: $level_pct % for $cycles cycles', (step) => {
		const { kind, level_pct, duration_cycles } = measureStep(step);
		expect(kind).toBe(step.level_pct > 100 ? 'swell' : step.level_pct < 5 ? 'interruption' : 'dip');
		// Class A: 0.2 % of the declared voltage, half a cycle at each end (IEC 61000-4-30:2015, 5.4, from memory).
		expect(Math.abs(level_pct)).toBeLessThan(0.2);
		expect(Math.abs(duration_cycles)).toBeLessThanOrEqual(1);
	});
});

describe('docs/accuracy.md', () => {
	it('was written by the present engine (else: npm run accuracy)', () => {
		expect(readFileSync(DOCUMENT, 'utf8').startsWith(headerOf(ENGINE_VERSION))).toBe(true);
	});
});
