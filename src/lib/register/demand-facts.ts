import { isThreePhase, type PointFacts } from './point-facts';

/** A current obtained from entered facts, with the way it was obtained. */
export interface ComputedCurrent {
	/** A; null when it is not known. */
	current_A: number | null;
	/** Lines of working; symbols as in "I_L", to be typeset. */
	working: string[];
	/** What the reader must know about the figure. */
	remarks: string[];
}

export const NOT_KNOWN: ComputedCurrent = { current_A: null, working: [], remarks: [] };

/** Volts by which apparent power gives line current: √3·U for three phases, U for one, 2·U for two legs. */
export function powerVoltage_V(point: Pick<PointFacts, 'system' | 'nominalVoltage_V'>): number {
	if (isThreePhase(point.system)) return Math.sqrt(3) * point.nominalVoltage_V;
	return point.system === 'split-phase' ? 2 * point.nominalVoltage_V : point.nominalVoltage_V;
}

/** Maximum demand load current I_L: as entered, or the mean of the monthly maxima. */
export function computeDemandCurrent(
	point: Pick<PointFacts, 'demand' | 'system' | 'nominalVoltage_V'>
): ComputedCurrent {
	const { demand } = point;
	if (demand.method === 'unknown') return NOT_KNOWN;
	if (demand.method === 'entered') return { current_A: demand.demandCurrent_A, working: [], remarks: [] };
	const given = demand.demands.filter((value) => value !== null);
	const factor = demand.quantity === 'active' ? demand.powerFactor : 1;
	if (given.length === 0 || factor === null) return NOT_KNOWN;
	const mean = given.reduce((sum, value) => sum + value, 0) / given.length;
	return { current_A: mean / factor / powerVoltage_V(point), working: [], remarks: [] };
}
