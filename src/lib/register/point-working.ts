import { ratioWorking } from '../assessment/short-circuit';
import type { WorkingStep } from '../assessment/working';
import { computeDemandCurrent, NOT_KNOWN, type ComputedCurrent } from './demand-facts';
import type { PointFacts } from './point-facts';
import type { PointForm } from './point-form';
import { readDemand, readNominalVoltage_V, readShortCircuit } from './point-form-facts';
import { computeShortCircuit } from './short-circuit-facts';

/** I_L, I_sc and their ratio, each with its working. */
export interface PointWorking {
	demand: ComputedCurrent;
	shortCircuit: ComputedCurrent;
	/** Unrounded; null when one of the two is not known. */
	shortCircuitRatio: number | null;
	ratioStep: WorkingStep | null;
}

function together(demand: ComputedCurrent, shortCircuit: ComputedCurrent): PointWorking {
	const [I_L, I_sc] = [demand.current_A, shortCircuit.current_A];
	if (I_L === null || I_sc === null)
		return { demand, shortCircuit, shortCircuitRatio: null, ratioStep: null };
	return { demand, shortCircuit, shortCircuitRatio: I_sc / I_L, ratioStep: ratioWorking(I_sc, I_L) };
}

export function pointWorking(
	facts: Pick<PointFacts, 'system' | 'nominalVoltage_V' | 'demand' | 'shortCircuit'>
): PointWorking {
	return together(computeDemandCurrent(facts), computeShortCircuit(facts));
}

/** The same while the form is being filled in: what can be read so far is computed, the rest is not known yet. */
export function workingOfForm(form: PointForm): PointWorking {
	const nominalVoltage_V = readNominalVoltage_V(form);
	if (nominalVoltage_V === null) return together(NOT_KNOWN, NOT_KNOWN);
	const base = { system: form.system, nominalVoltage_V };
	const demand = readDemand(form);
	const shortCircuit = readShortCircuit(form);
	return together(
		demand === null ? NOT_KNOWN : computeDemandCurrent({ ...base, demand }),
		shortCircuit === null ? NOT_KNOWN : computeShortCircuit({ ...base, shortCircuit })
	);
}
