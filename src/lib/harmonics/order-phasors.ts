import { ORDER_STRIDE } from './intervals';
import type { ChannelAnalysis } from './waveform-analysis';

/** What the windows of one conductor hold, row by row; see ChannelAnalysis. */
export type WindowRows = Pick<ChannelAnalysis, 'rms' | 'dc' | 'components' | 'phases_deg'>;

/**
 * The phasors of one conductor at every order of one window: rms·cos φ and rms·sin φ, V or A.
 * [ORDER_STRIDE] each; index 0 holds the mean value with its sign in `re`; NaN = no data for that order.
 */
export interface OrderPhasors {
	re: Float64Array;
	im: Float64Array;
}

export function emptyOrderPhasors(): OrderPhasors {
	return { re: new Float64Array(ORDER_STRIDE).fill(NaN), im: new Float64Array(ORDER_STRIDE).fill(NaN) };
}

/** The phasors of one window, orders 0 to `highestOrder`, into `into`; what lies above stays as it was. */
export function readOrderPhasors(
	rows: WindowRows,
	window: number,
	highestOrder: number,
	into: OrderPhasors
): void {
	into.re[0] = rows.dc[window]!;
	into.im[0] = 0;
	for (let order = 1; order <= highestOrder; order++) {
		const at = window * ORDER_STRIDE + order;
		const angle_rad = (rows.phases_deg[at]! * Math.PI) / 180;
		into.re[order] = rows.components[at]! * Math.cos(angle_rad);
		into.im[order] = rows.components[at]! * Math.sin(angle_rad);
	}
}

/** into = a·factorA + b·factorB, order by order; `into` may be one of the two. */
export function combineOrderPhasors(
	a: OrderPhasors,
	factorA: number,
	b: OrderPhasors,
	factorB: number,
	into: OrderPhasors
): void {
	for (let order = 0; order < ORDER_STRIDE; order++) {
		into.re[order] = factorA * a.re[order]! + factorB * b.re[order]!;
		into.im[order] = factorA * a.im[order]! + factorB * b.im[order]!;
	}
}

/** Sum of the squares of the orders 0 (dc) to `highestOrder`; NaN when one is missing. */
export function squareOfOrders(phasors: OrderPhasors, highestOrder: number): number {
	let sum = 0;
	for (let order = 0; order <= highestOrder; order++)
		sum += phasors.re[order]! ** 2 + phasors.im[order]! ** 2;
	return sum;
}

/** Angle of a phasor, degrees in (−180, 180]; NaN for none. */
export function angleOf_deg(re: number, im: number): number {
	return re === 0 && im === 0 ? NaN : (Math.atan2(im, re) * 180) / Math.PI;
}
