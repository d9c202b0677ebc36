import { ratioOf } from './apparent-power';

/** Below these shares of the fundamental a level is not told from noise: floors of IEC 61000-4-7, table 1, class I (from memory). */
export const NOISE_SHARE = { voltage: 0.0005, current: 0.0015 } as const;

/** Of the windows, this share must agree on the sign. */
const AGREEING_SHARE = 0.9;
/** Orders this near to a resonance, as a share of its order, are not told. */
const NEAR_RESONANCE = 0.15;

export interface DirectionQuestion {
	order: number;
	voltage_V: number;
	current_A: number;
	fundamentalVoltage_V: number;
	fundamentalCurrent_A: number;
	/** U_h·I_h of this order, or the sum of the phases' where they are taken together. */
	apparentPower_VA: number;
	/** Active power of this order, load convention. */
	activePower_W: number;
	reactivePower_var: number;
	/** Share of the windows in which the order's power has the same sign as here; 1 for a single window. */
	agreeingShare: number;
	/**
	 * Expanded uncertainty (k = 2) of the angle between voltage and current at this order, transducers and recorder
	 * together; null = not known, as beyond the reach of a voltage transformer.
	 */
	angleUncertainty_deg: number | null;
	/** Orders of known parallel or series resonances, need not be whole; none when not known. */
	resonances?: readonly number[];
}

export type DirectionReason =
	| 'no-data'
	| 'voltage-too-small'
	| 'current-too-small'
	| 'angle-not-known'
	| 'angle-within-uncertainty'
	| 'windows-disagree'
	| 'phases-disagree'
	| 'near-resonance'
	| 'sign-of-power';

export interface DirectionIndication {
	indication: 'from-network' | 'from-installation' | 'undecided';
	reason: DirectionReason;
	/** Current behind voltage, degrees in (−180, 180]; beyond ±90 the power flows out. */
	angle_deg: number;
	/** As asked with; null = not known. */
	angleUncertainty_deg: number | null;
	/** |P_h|/(U_h·I_h): near zero the sign says little. */
	activeShare: number;
}

/**
 * From which side of the point an order seems to come, by the sign of its active power.
 * returns  an indication, never a proof; `undecided` names its reason
 * source   limits of the method: Xu, Liu, Liu, An investigation on the validity of power-direction method for harmonic
 *          source determination, IEEE Trans. Power Delivery 18(1), 2003 (from memory)
 */
export function directionOf(question: DirectionQuestion): DirectionIndication {
	const { order, voltage_V, current_A, activePower_W, reactivePower_var, angleUncertainty_deg } = question;
	const angle_deg =
		activePower_W === 0 && reactivePower_var === 0
			? NaN
			: (Math.atan2(reactivePower_var, activePower_W) * 180) / Math.PI;
	const activeShare = ratioOf(Math.abs(activePower_W), question.apparentPower_VA);
	const said = (reason: DirectionReason, indication: DirectionIndication['indication'] = 'undecided') => ({
		indication,
		reason,
		angle_deg,
		angleUncertainty_deg,
		activeShare
	});
	if (!Number.isFinite(voltage_V) || !Number.isFinite(current_A) || !Number.isFinite(activePower_W))
		return said('no-data');
	if (!(voltage_V > NOISE_SHARE.voltage * question.fundamentalVoltage_V)) return said('voltage-too-small');
	if (!(current_A > NOISE_SHARE.current * question.fundamentalCurrent_A)) return said('current-too-small');
	if (question.resonances?.some((at) => Math.abs(order - at) <= NEAR_RESONANCE * at))
		return said('near-resonance');
	if (angleUncertainty_deg === null) return said('angle-not-known');
	// Distance from the quadrature on the scale of P itself: windows that scatter lower P against U·I, not the angle of the mean.
	const fromQuadrature_deg = (Math.asin(Math.min(1, activeShare)) * 180) / Math.PI;
	if (!(fromQuadrature_deg > angleUncertainty_deg)) return said('angle-within-uncertainty');
	if (question.agreeingShare < AGREEING_SHARE) return said('windows-disagree');
	return said('sign-of-power', activePower_W > 0 ? 'from-network' : 'from-installation');
}

/**
 * The indication of the phases together: that of the sum, unless two phases that are each decided point opposite ways.
 */
export function directionOfTotal(
	total: DirectionQuestion,
	phases: readonly DirectionIndication[]
): DirectionIndication {
	const own = directionOf(total);
	const decided = new Set(
		phases.map((phase) => phase.indication).filter((indication) => indication !== 'undecided')
	);
	if (own.indication !== 'undecided' && decided.size > 1)
		return { ...own, indication: 'undecided', reason: 'phases-disagree' };
	return own;
}

/** Belongs beneath every list of indications. */
export const DIRECTION_CAVEAT =
	'This is an indication, not proof. With sources on both sides the sign of an order’s active power follows the angle ' +
	'between them and not which is larger; the power is often small beside U_h·I_h, so that a few degrees of transducer ' +
	'error turn it round; and near a resonance both signs occur. Confirm a source by switching or by measuring at the ' +
	'suspected load before anybody is held to it.';
