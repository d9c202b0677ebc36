import type { OrderPhasors } from '../order-phasors';
import type { Phasor } from '../phasor';
import { sequenceOfOrder } from './order-sequences';

export interface SequenceComponents {
	zero: Phasor;
	positive: Phasor;
	negative: Phasor;
}

/**
 * Symmetrical components of one order of three conductors.
 * a, b, c  phasors of L1, L2, L3 at that order, all referred to one instant; any unit
 * returns  same unit; a = 1∠120°: X1 = (Xa + a·Xb + a²·Xc)/3, X2 = (Xa + a²·Xb + a·Xc)/3, X0 = (Xa + Xb + Xc)/3
 * note     where the conductors turn backwards (see the remark on phase rotation) positive and negative trade places
 * source   Fortescue's transformation, common practice
 */
export function sequenceComponents(a: Phasor, b: Phasor, c: Phasor): SequenceComponents {
	const [x, y, z] = [a, b, c].map(rectangular) as [OrderPhasors, OrderPhasors, OrderPhasors];
	const sequence = (sense: 0 | 1 | -1): Phasor => {
		const { re, im } = sequenceOfOrder(x, y, z, 0, sense);
		return { rms: Math.hypot(re, im), phase_deg: (Math.atan2(im, re) * 180) / Math.PI };
	};
	return { zero: sequence(0), positive: sequence(1), negative: sequence(-1) };
}

function rectangular({ rms, phase_deg }: Phasor): OrderPhasors {
	const angle_rad = (phase_deg * Math.PI) / 180;
	return { re: Float64Array.of(rms * Math.cos(angle_rad)), im: Float64Array.of(rms * Math.sin(angle_rad)) };
}

/** Negative- and zero-sequence unbalance in percent of the positive sequence (IEC 61000-4-30, 5.7). */
export function unbalance(components: SequenceComponents): { u2_pct: number; u0_pct: number } {
	const reference = components.positive.rms;
	if (!(reference > 0)) return { u2_pct: NaN, u0_pct: NaN };
	return {
		u2_pct: (100 * components.negative.rms) / reference,
		u0_pct: (100 * components.zero.rms) / reference
	};
}

/**
 * Negative-sequence unbalance from three line-to-line fundamentals alone.
 * returns  percent of the positive sequence; NaN when the three cannot close a triangle
 * source   IEC 61000-4-30:2015, 5.7.1 (from memory); equals the phasor ratio
 */
export function lineToLineUnbalance_pct(u12: number, u23: number, u31: number): number {
	const sumSquares = u12 ** 2 + u23 ** 2 + u31 ** 2;
	const beta = (u12 ** 4 + u23 ** 4 + u31 ** 4) / sumSquares ** 2;
	const root = Math.sqrt(Math.max(0, 3 - 6 * beta));
	if (3 - 6 * beta < -1e-12) return NaN;
	return 100 * Math.sqrt((1 - root) / (1 + root));
}
