import { err, ok, type Result } from '../result';
import type { AssessedPoint } from './assessment';
import { phaseFactorOf } from './phase-factor';
import { figure, symbol, type WorkingStep } from './working';

/** One month's maximum 15- or 30-minute demand, as bills state it. */
export type MonthlyDemand =
	| { kind: 'kVA'; apparentPower_VA: number }
	| { kind: 'kW'; activePower_W: number; powerFactor: number }
	| { kind: 'A'; current_A: number };

export interface DemandCurrent {
	demandCurrent_A: number;
	/** [12] current of each month's maximum demand, A. */
	monthly_A: number[];
	working: WorkingStep[];
}

const MONTHS = 12;

/** Apparent power of a month in VA, or the sentence that says what is wrong with it. */
function monthProblem(demand: MonthlyDemand, month: number): string | null {
	const name = `month ${month}`;
	if (demand.kind === 'kW' && !(demand.powerFactor > 0 && demand.powerFactor <= 1))
		return `Enter a power factor above 0 and up to 1 for ${name}.`;
	const amount =
		demand.kind === 'kW'
			? demand.activePower_W
			: demand.kind === 'kVA'
				? demand.apparentPower_VA
				: demand.current_A;
	return amount > 0 ? null : `Enter the maximum demand of ${name}; a month without demand has none to give.`;
}

function monthCurrent_A(demand: MonthlyDemand, factor_V: number): number {
	switch (demand.kind) {
		case 'A':
			return demand.current_A;
		case 'kVA':
			return demand.apparentPower_VA / factor_V;
		case 'kW':
			return demand.activePower_W / demand.powerFactor / factor_V;
	}
}

/**
 * Maximum demand load current: the mean of the currents of twelve consecutive monthly maximum demands
 * (IEEE Std 519-2022, definition of the maximum demand load current).
 * demands  exactly twelve; a shorter record is refused, because a mean of fewer months is another figure
 */
export function computeDemandCurrent(
	demands: MonthlyDemand[],
	point: Pick<AssessedPoint, 'system' | 'nominalVoltage_V'>
): Result<DemandCurrent, string> {
	if (demands.length !== MONTHS) {
		return err(
			`Enter the maximum demands of twelve consecutive months; ${demands.length} of them are there.`
		);
	}
	if (!(point.nominalVoltage_V > 0)) return err('Enter the nominal voltage of the point first.');
	for (const [index, demand] of demands.entries()) {
		const problem = monthProblem(demand, index + 1);
		if (problem !== null) return err(problem);
	}
	const { factor, formula, figures } = phaseFactorOf(point.system);
	const factor_V = factor * point.nominalVoltage_V;
	const monthly_A = demands.map((demand) => monthCurrent_A(demand, factor_V));
	const sum_A = monthly_A.reduce((sum, current_A) => sum + current_A, 0);
	const demandCurrent_A = sum_A / MONTHS;
	return ok({
		demandCurrent_A,
		monthly_A,
		working: [
			...demands.map((demand, index) => monthStep(demand, index + 1, monthly_A[index] ?? NaN)),
			{
				what: 'Maximum demand load current',
				formula: [symbol('I', 'L'), ' = (', symbol('I', '1'), ' + … + ', symbol('I', '12'), ') / 12'],
				figures: `${figure(sum_A, 'A')} / 12`,
				result: figure(demandCurrent_A, 'A')
			}
		]
	});

	function monthStep(demand: MonthlyDemand, month: number, current_A: number): WorkingStep {
		const left = [symbol('I', String(month)), ' = '];
		const divisor = `(${figures}${point.nominalVoltage_V}\u00a0V)`;
		const result = figure(current_A, 'A');
		const what = `Current of the maximum demand, month ${month}`;
		if (demand.kind === 'A') return { what, formula: [left[0] ?? ''], figures: 'as billed', result };
		if (demand.kind === 'kVA') {
			const power = figure(demand.apparentPower_VA / 1000, 'kVA');
			return {
				what,
				formula: [...left, 'S / (', ...formula, ')'],
				figures: `${power} / ${divisor}`,
				result
			};
		}
		const power = figure(demand.activePower_W / 1000, 'kW');
		return {
			what,
			formula: [...left, 'P / (λ · ', ...formula, ')'],
			figures: `${power} / (${demand.powerFactor} · ${figures}${point.nominalVoltage_V}\u00a0V)`,
			result
		};
	}
}
