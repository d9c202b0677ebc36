import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { computeDemandCurrent, type MonthlyDemand } from '$lib/assessment/demand-current';
import { computeShortCircuit, ratioWorking, type ShortCircuitSource } from '$lib/assessment/short-circuit';
import { formulaText } from '$lib/assessment/working';

const THREE_PHASE = { system: 'four-wire', nominalVoltage_V: 480 } as const;

function shortCircuit(
	source: ShortCircuitSource,
	point: Parameters<typeof computeShortCircuit>[1] = THREE_PHASE
) {
	const computed = computeShortCircuit(source, point);
	if (!computed.ok) throw new Error(computed.problem);
	return computed.value;
}

describe('short-circuit current', () => {
	// Common published exercise: 1500 kVA, 480 V, 5.75 %, infinite bus: 1804.2 A rated, 31 378 A short circuit.
	it('of a transformer on an infinite bus', () => {
		const found = shortCircuit({
			kind: 'transformer',
			rating_VA: 1_500_000,
			impedance_pct: 5.75,
			upstreamFaultLevel_VA: null
		});
		expect(found.shortCircuitCurrent_A).toBeCloseTo(31_377.73202, 4);
		expect(found.working[0]?.result).toBe('1804\u00a0A');
		expect(found.assumptions[0]).toContain('infinitely strong');
	});

	it('of the same transformer behind a supply of 250 MVA: reciprocals add', () => {
		const found = shortCircuit({
			kind: 'transformer',
			rating_VA: 1_500_000,
			impedance_pct: 5.75,
			upstreamFaultLevel_VA: 250e6
		});
		// By hand: S_T = 26.08696 MVA, 1/(1/26.08696 + 1/250) = 23.62205 MVA, ÷ (√3 · 480 V) = 28 413 A.
		expect(found.shortCircuitCurrent_A).toBeCloseTo(28_413.0, 0);
		expect(found.working.map((step) => step.what)).toContain('Fault level with the supply in series');
	});

	it('of a fault level, by the kind of system', () => {
		const level = { kind: 'fault-level', faultLevel_VA: 10e6 } as const;
		const at = (system: 'single-phase' | 'split-phase' | 'three-wire', nominalVoltage_V: number) =>
			shortCircuit(level, { system, nominalVoltage_V }).shortCircuitCurrent_A;
		expect(at('three-wire', 10_000)).toBeCloseTo(1000 / Math.sqrt(3), 9);
		expect(at('single-phase', 1000)).toBe(10_000);
		expect(at('split-phase', 120)).toBeCloseTo(10e6 / 240, 9);
	});

	it('never grows by a weaker supply', () => {
		const power = fc.double({ min: 1e6, max: 1e10, noNaN: true });
		fc.assert(
			fc.property(power, power, (a, b) => {
				const current = (upstreamFaultLevel_VA: number) =>
					shortCircuit({ kind: 'transformer', rating_VA: 1e6, impedance_pct: 6, upstreamFaultLevel_VA })
						.shortCircuitCurrent_A;
				expect(current(Math.min(a, b))).toBeLessThanOrEqual(current(Math.max(a, b)));
			}),
			{ seed: 519 }
		);
	});

	it('shows a working that can be typeset, without raw subscripts', () => {
		const found = shortCircuit({ kind: 'fault-level', faultLevel_VA: 26.08696e6 });
		const [step] = found.working;
		expect(step?.formula[0]).toEqual({ symbol: 'I', subscript: 'sc' });
		expect(formulaText(step?.formula ?? [])).not.toContain('_');
		expect(ratioWorking(31_200, 1000).result).toBe('31.20');
	});

	it.each<[string, ShortCircuitSource]>([
		['a zero current', { kind: 'given', shortCircuitCurrent_A: 0 }],
		['a negative fault level', { kind: 'fault-level', faultLevel_VA: -1 }],
		[
			'an impedance of 0 %',
			{ kind: 'transformer', rating_VA: 1e6, impedance_pct: 0, upstreamFaultLevel_VA: null }
		],
		[
			'an upstream level of 0',
			{ kind: 'transformer', rating_VA: 1e6, impedance_pct: 6, upstreamFaultLevel_VA: 0 }
		]
	])('refuses %s with a sentence', (_what, source) => {
		const refused = computeShortCircuit(source, THREE_PHASE);
		expect(!refused.ok && refused.problem).toMatch(/^Enter .+\.$/);
	});
});

// Definition: IEEE Std 519, maximum demand load current (mean of the twelve monthly maxima), public quotations.
describe('demand current', () => {
	const kVA = (apparentPower_VA: number): MonthlyDemand => ({ kind: 'kVA', apparentPower_VA });
	const POWERS = [600, 620, 640, 700, 760, 830, 900, 880, 800, 720, 650, 610];

	it('is the mean of twelve monthly maxima', () => {
		const found = computeDemandCurrent(
			POWERS.map((power) => kVA(power * 1000)),
			THREE_PHASE
		);
		// By hand: the twelve sum to 8710 kVA; 8710 / 12 / (√3 · 0.48 kV) = 873.04 A.
		expect(found.ok && found.value.demandCurrent_A).toBeCloseTo(8_710_000 / 12 / (Math.sqrt(3) * 480), 9);
		expect(found.ok && Math.abs(found.value.demandCurrent_A - 873.04)).toBeLessThan(0.01);
		expect(found.ok && found.value.working).toHaveLength(13);
	});

	it('is the same from kilowatts with power factor and from amperes', () => {
		const kw = POWERS.map((p): MonthlyDemand => ({ kind: 'kW', activePower_W: p * 800, powerFactor: 0.8 }));
		const amps = POWERS.map((p): MonthlyDemand => ({
			kind: 'A',
			current_A: (p * 1000) / (Math.sqrt(3) * 480)
		}));
		const current = (demands: MonthlyDemand[]) => {
			const found = computeDemandCurrent(demands, THREE_PHASE);
			return found.ok ? found.value.demandCurrent_A : NaN;
		};
		const expected = current(POWERS.map((power) => kVA(power * 1000)));
		expect(current(kw)).toBeCloseTo(expected, 9);
		expect(current(amps)).toBeCloseTo(expected, 9);
	});

	it('is refused for fewer months, an impossible power factor and an empty month', () => {
		const refuse = (demands: MonthlyDemand[]) => {
			const found = computeDemandCurrent(demands, THREE_PHASE);
			return found.ok ? '' : found.problem;
		};
		expect(refuse(POWERS.slice(1).map((p) => kVA(p)))).toContain('twelve consecutive months; 11');
		expect(refuse(POWERS.map(() => ({ kind: 'kW', activePower_W: 1, powerFactor: 1.2 })))).toContain(
			'power factor'
		);
		expect(refuse(POWERS.map(() => kVA(0)))).toContain('month 1');
	});
});
