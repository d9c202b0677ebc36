import { computeDemandCurrent as meanOfTwelve, type MonthlyDemand } from '../assessment/demand-current';
import { phaseFactorOf } from '../assessment/phase-factor';
import { figure, symbol, type WorkingStep } from '../assessment/working';
import type { Demand, PointFacts } from './point-facts';

/** A current obtained from a point's facts, with the way it was obtained. */
export interface ComputedCurrent {
	/** A, unrounded; null when it is not known. */
	current_A: number | null;
	working: WorkingStep[];
	/** What the reader must know about the figure, each a sentence. */
	remarks: string[];
}

export const NOT_KNOWN: ComputedCurrent = { current_A: null, working: [], remarks: [] };

type Monthly = Extract<Demand, { method: 'monthly' }>;
type Voltage = Pick<PointFacts, 'system' | 'nominalVoltage_V'>;

function monthlyDemand(demand: Monthly, amount: number): MonthlyDemand {
	return demand.quantity === 'apparent'
		? { kind: 'kVA', apparentPower_VA: amount }
		: { kind: 'kW', activePower_W: amount, powerFactor: demand.powerFactor ?? NaN };
}

/** Mean of fewer than twelve months: not what the definition asks for, and said so. */
function partialMean(demand: Monthly, given: number[], point: Voltage): ComputedCurrent {
	const { factor, formula, figures } = phaseFactorOf(point.system);
	const powerFactor = demand.quantity === 'active' ? demand.powerFactor : 1;
	if (powerFactor === null) return NOT_KNOWN;
	const mean = given.reduce((sum, amount) => sum + amount, 0) / given.length;
	const current_A = mean / (powerFactor * factor * point.nominalVoltage_V);
	const active = demand.quantity === 'active';
	const divisor = `${figures}${point.nominalVoltage_V}\u00a0V`;
	return {
		current_A,
		working: [
			{
				what: `Current of the mean maximum demand of ${given.length} months`,
				formula: [symbol('I', 'L'), active ? ' = P / (λ · ' : ' = S / (', ...formula, ')'],
				figures: `${figure(mean / 1000, active ? 'kW' : 'kVA')} / (${active ? `${powerFactor} · ` : ''}${divisor})`,
				result: figure(current_A, 'A')
			}
		],
		remarks: [
			`Only ${given.length} of the twelve monthly demands ${given.length === 1 ? 'is' : 'are'} given; I_L is their mean. The definition asks for twelve: add the others when the bills are at hand.`
		]
	};
}

/** Maximum demand load current I_L of a point: as entered, or the mean over the monthly maxima. */
export function computeDemandCurrent(point: Voltage & Pick<PointFacts, 'demand'>): ComputedCurrent {
	const { demand } = point;
	if (demand.method === 'unknown') return NOT_KNOWN;
	if (demand.method === 'entered') return { current_A: demand.demandCurrent_A, working: [], remarks: [] };
	const given = demand.demands.filter((amount) => amount !== null);
	if (given.length === 0) return NOT_KNOWN;
	if (given.length < demand.demands.length) return partialMean(demand, given, point);
	const mean = meanOfTwelve(
		given.map((amount) => monthlyDemand(demand, amount)),
		point
	);
	return mean.ok
		? { current_A: mean.value.demandCurrent_A, working: mean.value.working, remarks: [] }
		: { ...NOT_KNOWN, remarks: [mean.problem] };
}
