import type { AssessedPoint } from '../assessment/assessment';
import { computeDemandCurrent } from './demand-facts';
import { computeShortCircuit } from './short-circuit-facts';
import type { PointFacts } from './point-facts';

/** The facts that choose limit tables and rows, with I_L and I_sc computed from how they were entered. */
export function toAssessedPoint(
	facts: Pick<
		PointFacts,
		'kind' | 'system' | 'nominalVoltage_V' | 'nominalFrequency_Hz' | 'demand' | 'shortCircuit'
	>
): AssessedPoint {
	return {
		kind: facts.kind,
		system: facts.system,
		nominalVoltage_V: facts.nominalVoltage_V,
		nominalFrequency_Hz: facts.nominalFrequency_Hz,
		demandCurrent_A: computeDemandCurrent(facts).current_A,
		shortCircuitCurrent_A: computeShortCircuit(facts).current_A
	};
}
