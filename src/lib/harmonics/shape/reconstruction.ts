import { crestFactor } from '../crest-factor';
import type { OrderRow } from './order-row';

export interface PartialSumSettings {
	/** Orders to add up, ≥ 1, in any order. */
	orders: Iterable<number>;
	/** Whether the mean value is added. */
	withDc?: boolean;
	/** Whole cycles to draw; 1 when left out. */
	cycles?: number;
	/** Points over all cycles; the last one lies one step before the end. */
	points: number;
	/** Phase of the reference fundamental at the first point, degrees; 0 (its crest) when left out. */
	start_deg?: number;
}

/** The wave that some of the orders make. */
export interface PartialSum {
	/** [points] unit of the row. */
	wave: Float64Array;
	/** Orders that were asked for and have no data; they are not in the wave. */
	missingOrders: number[];
	/** Of the orders in the wave, by their sum of squares. */
	rms: number;
	/** Greatest absolute point. */
	peak: number;
	/** Of the points; a crest between two of them is missed by at most (π·H/points per cycle)²/2 of the highest order H. */
	crestFactor: number;
}

/**
 * Adds up chosen orders over whole cycles: x(t) = dc + Σ √2·Y_h·cos(h·(ωt + start) + φ_h).
 * row      rms and phases by order; phases referred to the reference fundamental, as analyses hold them
 * returns  the wave with its rms and crest factor; everything 0 for an empty choice
 * error    rounding; angles are taken from whole multiples of the step, so that cycles repeat to the digit
 */
export function partialSum(row: OrderRow, settings: PartialSumSettings): PartialSum {
	const { orders, withDc = false, cycles = 1, points, start_deg = 0 } = settings;
	const cosTable = Float64Array.from({ length: points }, (_, i) => Math.cos((2 * Math.PI * i) / points));
	const sinTable = Float64Array.from({ length: points }, (_, i) => Math.sin((2 * Math.PI * i) / points));
	const wave = new Float64Array(points);
	const missingOrders: number[] = [];
	let square = 0;
	if (withDc) {
		if (Number.isNaN(row.dc)) missingOrders.push(0);
		else {
			wave.fill(row.dc);
			square += row.dc * row.dc;
		}
	}
	for (const order of [...new Set(orders)].sort((a, b) => a - b)) {
		const rms = row.components[order] ?? NaN;
		const phase_deg = row.phases_deg[order] ?? NaN;
		if (rms === 0) continue;
		if (Number.isNaN(rms) || Number.isNaN(phase_deg)) {
			missingOrders.push(order);
			continue;
		}
		square += rms * rms;
		const phase = ((phase_deg + order * start_deg) * Math.PI) / 180;
		const re = Math.SQRT2 * rms * Math.cos(phase);
		const im = Math.SQRT2 * rms * Math.sin(phase);
		const stride = (order * cycles) % points;
		for (let n = 0, at = 0; n < points; n++) {
			wave[n]! += re * cosTable[at]! - im * sinTable[at]!;
			at += stride;
			if (at >= points) at -= points;
		}
	}
	const rms = Math.sqrt(square);
	const peak = wave.reduce((greatest, value) => Math.max(greatest, Math.abs(value)), 0);
	return { wave, missingOrders, rms, peak, crestFactor: crestFactor(peak, rms) };
}

/** What a partial sum leaves out of the wave that was measured. */
export interface Residual {
	/** [points] measured − sum. */
	wave: Float64Array;
	rms: number;
	/** Percent of the rms of the measured wave; NaN when that is 0. */
	rms_pct: number;
	/** Greatest deviation, with its sign; null when a sample is missing. */
	largest: {
		value: number;
		point: number;
		/** Angle of the fundamental since the first point, degrees in [0, 360). */
		angle_deg: number;
	} | null;
}

/**
 * Compares a measured window with a partial sum on the same points.
 * measured  [points] samples over whole cycles, evenly spaced, the first at the first point of the sum
 * cycles    that the points cover
 * returns   NaN figures when a sample is missing: the rest is not judged alone
 */
export function residualOf(measured: Float64Array, sum: Float64Array, cycles: number): Residual {
	if (measured.length !== sum.length)
		throw new RangeError(`${measured.length} measured points against ${sum.length} of the sum`);
	const wave = measured.map((value, n) => value - sum[n]!);
	let square = 0;
	let whole = 0;
	let point = 0;
	for (let n = 0; n < wave.length; n++) {
		square += wave[n]! * wave[n]!;
		whole += measured[n]! * measured[n]!;
		if (Math.abs(wave[n]!) > Math.abs(wave[point]!)) point = n;
	}
	const rms = Math.sqrt(square / wave.length);
	return {
		wave,
		rms,
		rms_pct: whole > 0 ? 100 * Math.sqrt(square / whole) : NaN,
		largest: Number.isNaN(rms)
			? null
			: { value: wave[point]!, point, angle_deg: ((360 * cycles * point) / wave.length) % 360 }
	};
}
