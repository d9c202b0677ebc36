import { rootOfDifference } from './apparent-power';

/** One phase as the older sums need it. */
export interface SummedPhase {
	apparentPower_VA: number;
	activePower_W: number;
	/** Q_B = Σ U_h·I_h·sin φ_h over all orders. */
	budeanuReactivePower_var: number;
}

/** The two older apparent powers of several phases; neither is the effective one, and each says more than it should of a balanced load only. */
export interface SummedApparentPower {
	/** S_A = ΣS of the phases. */
	arithmetic_VA: number;
	/** S_V = √(P² + Q_B² + D_B²) of the phases' sums. */
	vector_VA: number;
	/** P/S_A and P/S_V. */
	arithmeticPowerFactor: number;
	vectorPowerFactor: number;
}

/**
 * Arithmetic and vector apparent power, for information.
 * source  IEEE Std 1459-2010, 3.2.3.1 (from memory): S_A = ΣS; S_V with Q_B and D_B added up, D_B = √(S² − P² − Q_B²)
 */
export function summedApparentPower(phases: readonly SummedPhase[]): SummedApparentPower {
	let arithmetic = 0;
	let active = 0;
	let reactive = 0;
	let distortion = 0;
	for (const phase of phases) {
		arithmetic += phase.apparentPower_VA;
		active += phase.activePower_W;
		reactive += phase.budeanuReactivePower_var;
		distortion += rootOfDifference(
			phase.apparentPower_VA,
			Math.hypot(phase.activePower_W, phase.budeanuReactivePower_var)
		);
	}
	const vector = Math.hypot(active, reactive, distortion);
	return {
		arithmetic_VA: arithmetic,
		vector_VA: vector,
		arithmeticPowerFactor: arithmetic > 0 ? active / arithmetic : NaN,
		vectorPowerFactor: vector > 0 ? active / vector : NaN
	};
}
