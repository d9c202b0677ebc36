import { ratioOf, rootOfDifference } from './apparent-power';

/**
 * Effective voltage of a four-wire system, V to neutral.
 * phase_V       [3] to neutral
 * lineToLine_V  [3]
 * source        IEEE Std 1459-2010, 3.2.2.8 and 3.2.3.2 with ρ = ξ = 1 (from memory):
 *               U_e² = [3(U_a²+U_b²+U_c²) + U_ab²+U_bc²+U_ca²]/18
 */
export function effectiveVoltageFourWire_V(
	phase_V: readonly [number, number, number],
	lineToLine_V: readonly [number, number, number]
): number {
	return Math.sqrt((3 * sumOfSquares(phase_V) + sumOfSquares(lineToLine_V)) / 18);
}

/** Effective voltage of a three-wire system, V: U_e² = (U_ab²+U_bc²+U_ca²)/9; source as above. */
export function effectiveVoltageThreeWire_V(lineToLine_V: readonly [number, number, number]): number {
	return Math.sqrt(sumOfSquares(lineToLine_V) / 9);
}

/** Effective current, A: I_e² = (I_a²+I_b²+I_c²+I_n²)/3 with ρ = 1; neutral_A 0 in a three-wire system; source as above. */
export function effectiveCurrent_A(line_A: readonly [number, number, number], neutral_A: number): number {
	return Math.sqrt((sumOfSquares(line_A) + neutral_A * neutral_A) / 3);
}

/**
 * Sum of the squares of the three line-to-line voltages from those to neutral: 3·ΣU² − 9·U0², true of instants and so
 * of mean squares; U0 is the rms of a third of the sum of the three.
 */
export function lineToLineSquares(sumOfPhaseSquares: number, zeroSequenceSquare: number): number {
	return Math.max(0, 3 * sumOfPhaseSquares - 9 * zeroSequenceSquare);
}

function sumOfSquares(values: readonly number[]): number {
	let sum = 0;
	for (const value of values) sum += value * value;
	return sum;
}

/** Effective quantities and sequences of three phases, of one window or of several taken together. */
export interface EffectiveLevels {
	voltage_V: number;
	fundamentalVoltage_V: number;
	current_A: number;
	fundamentalCurrent_A: number;
	/** All phases together. */
	activePower_W: number;
	fundamentalActivePower_W: number;
	fundamentalReactivePower_var: number;
	/** Positive sequence of the fundamental. */
	positiveVoltage_V: number;
	positiveCurrent_A: number;
	positiveActivePower_W: number;
	positiveReactivePower_var: number;
}

/** Powers of three phases together; load convention: P > 0 flows into the installation. */
export interface ThreePhasePower {
	/** P. */
	activePower_W: number;
	/** P1, all sequences. */
	fundamentalActivePower_W: number;
	/** P_H = P − P1. */
	harmonicActivePower_W: number;
	/** Q1, all phases added. */
	fundamentalReactivePower_var: number;
	/** U_e, V to neutral, and I_e. */
	effectiveVoltage_V: number;
	effectiveCurrent_A: number;
	/** S_e = 3·U_e·I_e. */
	effectiveApparentPower_VA: number;
	/** S_e1. */
	fundamentalEffectiveApparentPower_VA: number;
	/** S_eN = √(S_e² − S_e1²). */
	nonFundamentalEffectiveApparentPower_VA: number;
	/** D_eI, D_eV, S_eH: what S_eN is made of. */
	currentDistortionPower_var: number;
	voltageDistortionPower_var: number;
	harmonicApparentPower_VA: number;
	/** P1+, Q1+, S1+. */
	positiveActivePower_W: number;
	positiveReactivePower_var: number;
	positiveApparentPower_VA: number;
	/** S_U1 = √(S_e1² − S1+²): what unbalance costs at the fundamental. */
	unbalancePower_VA: number;
	/** N = √(S_e² − P²). */
	nonActivePower_var: number;
	/** PF_e = P/S_e. */
	powerFactor: number;
	/** PF1+ = P1+/S1+. */
	positiveDisplacementFactor: number;
	/** S_eN/S_e1. */
	harmonicPollution: number;
}

/**
 * Powers of a three-phase point from its effective quantities.
 * source  IEEE Std 1459-2010, 3.2.3 (from memory): S_e² = S_e1² + D_eI² + D_eV² + S_eH²; S_e1² = S1+² + S_U1²
 */
export function threePhasePower(levels: EffectiveLevels): ThreePhasePower {
	const voltage_H = rootOfDifference(levels.voltage_V, levels.fundamentalVoltage_V);
	const current_H = rootOfDifference(levels.current_A, levels.fundamentalCurrent_A);
	const apparent = 3 * levels.voltage_V * levels.current_A;
	const fundamental = 3 * levels.fundamentalVoltage_V * levels.fundamentalCurrent_A;
	const currentDistortion = 3 * levels.fundamentalVoltage_V * current_H;
	const voltageDistortion = 3 * voltage_H * levels.fundamentalCurrent_A;
	const harmonicApparent = 3 * voltage_H * current_H;
	const nonFundamental = Math.hypot(currentDistortion, voltageDistortion, harmonicApparent);
	const positive = 3 * levels.positiveVoltage_V * levels.positiveCurrent_A;
	return {
		activePower_W: levels.activePower_W,
		fundamentalActivePower_W: levels.fundamentalActivePower_W,
		harmonicActivePower_W: levels.activePower_W - levels.fundamentalActivePower_W,
		fundamentalReactivePower_var: levels.fundamentalReactivePower_var,
		effectiveVoltage_V: levels.voltage_V,
		effectiveCurrent_A: levels.current_A,
		effectiveApparentPower_VA: apparent,
		fundamentalEffectiveApparentPower_VA: fundamental,
		nonFundamentalEffectiveApparentPower_VA: nonFundamental,
		currentDistortionPower_var: currentDistortion,
		voltageDistortionPower_var: voltageDistortion,
		harmonicApparentPower_VA: harmonicApparent,
		positiveActivePower_W: levels.positiveActivePower_W,
		positiveReactivePower_var: levels.positiveReactivePower_var,
		positiveApparentPower_VA: positive,
		unbalancePower_VA: rootOfDifference(fundamental, positive),
		nonActivePower_var: rootOfDifference(apparent, levels.activePower_W),
		powerFactor: ratioOf(levels.activePower_W, apparent),
		positiveDisplacementFactor: ratioOf(levels.positiveActivePower_W, positive),
		harmonicPollution: ratioOf(nonFundamental, fundamental)
	};
}
