import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { assess } from '$lib/assessment/assess';
import type { Assessment } from '$lib/assessment/assessment';
import type { IntervalSeries } from '$lib/harmonics/intervals';
import { limitSet } from '../limits/load-limit-files';
import { FIVE_PERCENT, makeSeries, POINT } from './series-builder';

const IEEE = limitSet('ieee-519-2022');
const PHASES = ['L1', 'L2', 'L3'] as const;
type Triple = [number[], number[], number[]];

/** Percent of demand current at orders 2…13 for each phase, around and on the limits. */
const levels = fc.array(fc.oneof(fc.double({ min: 0, max: 12, noNaN: true }), fc.constantFrom(7, 3.5)), {
	minLength: 12,
	maxLength: 12
});
const triple: fc.Arbitrary<Triple> = fc.tuple(levels, levels, levels);

function currents(percents: Triple, full_A: number): IntervalSeries[] {
	return PHASES.map((phase, index) =>
		makeSeries({
			quantity: 'current',
			phase,
			interval: '3s',
			count: 3,
			level: (order) => (order === 1 ? full_A : ((percents[index]?.[order - 2] ?? 0) * full_A) / 100)
		})
	);
}

function run(percents: Triple, full_A: number): Assessment {
	return assess({
		point: { ...POINT, demandCurrent_A: full_A, shortCircuitCurrent_A: 35 * full_A },
		limitSet: IEEE,
		series: currents(percents, full_A),
		siteTimeZone: 'UTC',
		uncertainty: FIVE_PERCENT,
		decisionRule: 'guarded',
		tableKeys: ['table-2']
	});
}

const verdicts = (assessment: Assessment, phase: string) =>
	assessment.rows.filter((row) => row.phase === phase).map((row) => row.verdict);

describe('verdicts do not depend on', () => {
	it('the size of the installation', () => {
		// By powers of two the percentages are the very same doubles, also on the limit itself.
		const power = fc.integer({ min: -6, max: 10 }).map((exponent) => 2 ** exponent);
		fc.assert(
			fc.property(triple, power, (percents, s) => {
				const [a, b] = [run(percents, 1024), run(percents, 1024 * s)];
				expect(b.verdict).toBe(a.verdict);
				expect(b.rows.map((row) => row.verdict)).toEqual(a.rows.map((row) => row.verdict));
			}),
			{ seed: 519, numRuns: 40 }
		);
	});

	it('which phase is called which', () => {
		fc.assert(
			fc.property(triple, fc.shuffledSubarray([0, 1, 2], { minLength: 3 }), (percents, order) => {
				const original = run(percents, 1000);
				const shuffled = run(order.map((index) => percents[index]) as Triple, 1000);
				expect(shuffled.verdict).toBe(original.verdict);
				for (const [to, from] of order.entries()) {
					expect(verdicts(shuffled, PHASES[to] ?? '')).toEqual(verdicts(original, PHASES[from] ?? ''));
				}
			}),
			{ seed: 519, numRuns: 40 }
		);
	});
});

it('a row is compliant exactly when its unrounded value keeps its limit by more than its uncertainty', () => {
	fc.assert(
		fc.property(triple, (percents) => {
			for (const row of run(percents, 1000).rows) {
				if (row.value_pct === null || row.limit_pct === null || row.uncertainty_pct === null) continue;
				expect(row.verdict === 'compliant').toBe(row.value_pct < row.limit_pct - row.uncertainty_pct);
				expect(row.verdict.startsWith('compliant')).toBe(row.value_pct < row.limit_pct);
			}
		}),
		{ seed: 519, numRuns: 40 }
	);
});
