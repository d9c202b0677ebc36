import type { OrderPhasors } from '../order-phasors';

/** Which way the conductors turn: L1–L2–L3 or L1–L3–L2. */
export type Rotation = 'L1-L2-L3' | 'L1-L3-L2';

const SIN_120 = Math.sqrt(3) / 2;

/**
 * One sequence of one order, rectangular: X = (Xa + Xb∠turn + Xc∠−turn)/3 with turn 0, +120° or −120°.
 * sense  0 zero, 1 positive, −1 negative for conductors that turn a–b–c
 */
export function sequenceOfOrder(
	a: OrderPhasors,
	b: OrderPhasors,
	c: OrderPhasors,
	order: number,
	sense: 0 | 1 | -1
): { re: number; im: number } {
	const bRe = b.re[order]!;
	const bIm = b.im[order]!;
	const cRe = c.re[order]!;
	const cIm = c.im[order]!;
	const cos = sense === 0 ? 1 : -0.5;
	const sin = sense * SIN_120;
	return {
		re: (a.re[order]! + cos * (bRe + cRe) - sin * (bIm - cIm)) / 3,
		im: (a.im[order]! + cos * (bIm + cIm) + sin * (bRe - cRe)) / 3
	};
}

/** The sequence that a balanced load or source has at an order: 3n+1 positive, 3n−1 negative, 3n zero (common practice). */
export function balancedSequence(order: number): 'positive' | 'negative' | 'zero' {
	const rest = order % 3;
	return rest === 1 ? 'positive' : rest === 2 ? 'negative' : 'zero';
}
