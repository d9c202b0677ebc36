import { interpolationResponse } from '../../numerics/fourier-integral/fourier-integral';
import { cutPieces } from '../../numerics/fourier-integral/line-pieces';
import type { WindowSpectrumDesign } from '../window-spectrum';
import { MAX_ORDER } from '../intervals';

/**
 * Least share of an order that has to be left after its samples are joined by straight lines: 5 % of reading is what
 * class I allows (IEC 61000-4-7:2002+A1:2008, table 1, from memory).
 */
export const LEAST_RESPONSE = 0.95;

/** What joining the samples of a stretch by straight lines leaves of its orders. */
export interface FaithfulOrders {
	/** Highest order, up to MAX_ORDER + 1, of which no window-long part of the stretch loses more than allowed; may be 0. */
	highest: number;
	/** Least share left of the fundamental and of order min(highest, MAX_ORDER) in any window-long part. */
	leastOfFundamental: number;
	leastOfHighest: number;
}

/**
 * Looks along a stretch, one window's length after the other. What is left of an order depends on the steps alone, and
 * exactly so: Σ Δ·sinc²(h·f·Δ)/ΣΔ over the steps Δ.
 * stamps_s      instants of the stretch, seconds, ascending
 * frequency_Hz  of the fundamental
 * error         a window that lies across two of the parts may lose a little more than either
 */
export function faithfulOrders(
	stamps_s: Float64Array,
	frequency_Hz: number,
	cyclesPerWindow: 10 | 12
): FaithfulOrders {
	const window_s = cyclesPerWindow / frequency_Hz;
	const first = stamps_s[0]!;
	const last = stamps_s[stamps_s.length - 1]!;
	const parts = Math.max(1, Math.floor((last - first) / window_s));
	let highest = MAX_ORDER + 1;
	const least = { fundamental: 1, highest: 1 };
	for (const pass of ['order', 'shares'] as const) {
		for (let part = 0; part < parts; part++) {
			const from = first + part * window_s;
			const pieces = cutPieces(stamps_s, from, Math.min(last, from + window_s));
			const left = (order: number) => interpolationResponse(pieces, 2 * Math.PI * order * frequency_Hz);
			if (pass === 'shares') {
				least.fundamental = Math.min(least.fundamental, left(1));
				least.highest = Math.min(least.highest, left(Math.min(highest, MAX_ORDER)));
			} else {
				// The subgroup's upper line has to be faithful as well.
				while (highest > 0 && left(highest + 1 / cyclesPerWindow) < LEAST_RESPONSE) highest--;
			}
		}
	}
	return { highest, leastOfFundamental: least.fundamental, leastOfHighest: least.highest };
}

/** How windows of such a stretch become spectra: lines are mean values, straight from the integral. */
export function unevenSpectrumDesign(highest: number, cyclesPerWindow: 10 | 12): WindowSpectrumDesign {
	const highestOrder = Math.min(MAX_ORDER, highest);
	return {
		points: 1,
		highestOrder,
		reachesBeyondHighest: highest > highestOrder,
		lineCount: cyclesPerWindow * (highestOrder + 1) + 1,
		// Nothing is interpolated: windows may reach the very ends of their stretch.
		kernel: { cutoff: 0, halfWidth: 0, beta: 0 }
	};
}
