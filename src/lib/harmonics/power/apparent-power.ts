/** What a split of the powers of one phase needs; all rms, V and A, dc and interharmonics included where not said otherwise. */
export interface PhaseLevels {
	voltage_V: number;
	current_A: number;
	fundamentalVoltage_V: number;
	fundamentalCurrent_A: number;
	/** Mean of u·i. */
	activePower_W: number;
	fundamentalActivePower_W: number;
	/** Positive when the current lags. */
	fundamentalReactivePower_var: number;
}

/** Powers of one phase by IEEE Std 1459; load convention: P > 0 flows into the installation. */
export interface SinglePhasePower {
	/** P. */
	activePower_W: number;
	/** P1. */
	fundamentalActivePower_W: number;
	/** P_H = P − P1: all orders but the first, dc included. */
	harmonicActivePower_W: number;
	/** Q1, positive when the current lags. */
	fundamentalReactivePower_var: number;
	/** S = U·I. */
	apparentPower_VA: number;
	/** S1 = U1·I1. */
	fundamentalApparentPower_VA: number;
	/** S_N = √(S² − S1²). */
	nonFundamentalApparentPower_VA: number;
	/** S_H = U_H·I_H. */
	harmonicApparentPower_VA: number;
	/** D_I = U1·I_H. */
	currentDistortionPower_var: number;
	/** D_V = U_H·I1. */
	voltageDistortionPower_var: number;
	/** D_H = √(S_H² − P_H²). */
	harmonicDistortionPower_var: number;
	/** N = √(S² − P²). */
	nonActivePower_var: number;
	/** PF = P/S. */
	powerFactor: number;
	/** PF1 = P1/S1 = cos φ1. */
	displacementFactor: number;
	/** S_N/S1. */
	harmonicPollution: number;
}

/** √(a² − b²) of two figures of which b cannot be the larger; what rounding leaves below zero is zero. */
export function rootOfDifference(a: number, b: number): number {
	const difference = a * a - b * b;
	return difference < 0 ? 0 : Math.sqrt(difference);
}

/** a/b; NaN where b is not positive. */
export function ratioOf(a: number, b: number): number {
	return b > 0 ? a / b : NaN;
}

/**
 * Powers of one phase from its levels, of one window or of several taken together (rms levels by root mean square,
 * powers by mean: the split closes in both cases).
 * returns  NaN where a level is missing; factors NaN where nothing flows
 * source   IEEE Std 1459-2010, 3.1.2 (from memory): U² = U1² + U_H² and I² = I1² + I_H² with dc and interharmonics in
 *          the H part; S² = S1² + D_I² + D_V² + S_H² = P² + N²
 */
export function singlePhasePower(levels: PhaseLevels): SinglePhasePower {
	const voltage_H = rootOfDifference(levels.voltage_V, levels.fundamentalVoltage_V);
	const current_H = rootOfDifference(levels.current_A, levels.fundamentalCurrent_A);
	const apparent = levels.voltage_V * levels.current_A;
	const fundamental = levels.fundamentalVoltage_V * levels.fundamentalCurrent_A;
	const currentDistortion = levels.fundamentalVoltage_V * current_H;
	const voltageDistortion = voltage_H * levels.fundamentalCurrent_A;
	const harmonicApparent = voltage_H * current_H;
	const harmonicActive = levels.activePower_W - levels.fundamentalActivePower_W;
	const nonFundamental = Math.hypot(currentDistortion, voltageDistortion, harmonicApparent);
	return {
		activePower_W: levels.activePower_W,
		fundamentalActivePower_W: levels.fundamentalActivePower_W,
		harmonicActivePower_W: harmonicActive,
		fundamentalReactivePower_var: levels.fundamentalReactivePower_var,
		apparentPower_VA: apparent,
		fundamentalApparentPower_VA: fundamental,
		nonFundamentalApparentPower_VA: nonFundamental,
		harmonicApparentPower_VA: harmonicApparent,
		currentDistortionPower_var: currentDistortion,
		voltageDistortionPower_var: voltageDistortion,
		harmonicDistortionPower_var: rootOfDifference(harmonicApparent, harmonicActive),
		nonActivePower_var: rootOfDifference(apparent, levels.activePower_W),
		powerFactor: ratioOf(levels.activePower_W, apparent),
		displacementFactor: ratioOf(levels.fundamentalActivePower_W, fundamental),
		harmonicPollution: ratioOf(nonFundamental, fundamental)
	};
}
