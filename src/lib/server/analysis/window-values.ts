import { crestFactor } from '../../harmonics/crest-factor';
import { thd_pctOfFundamental } from '../../harmonics/distortion';
import { ORDER_STRIDE } from '../../harmonics/intervals';
import type { AnalysisSeriesRow } from '../db/rows';
import { bufferToFloat64, bufferToFloats } from './series-codec';

/** One channel over one window, or over several taken together. Absolute values in primary V or A; NaN = no data. */
export interface ChannelValues {
	rms: number;
	dc: number;
	peak: number;
	crest: number;
	/** [ORDER_STRIDE] rms of each harmonic subgroup. */
	subgroups: Float64Array;
	/** [ORDER_STRIDE] degrees, referred to the reference channel's fundamental. */
	phases_deg: Float64Array;
	/** Over the orders 2 to `highestOrder`. */
	thd_pctOfFundamental: number;
}

/** Root mean square of the selected entries of one column of a row-by-row matrix; NaN when one is missing. */
function columnRms(values: Float64Array, windows: readonly number[], stride: number, column: number): number {
	let sum = 0;
	for (const window of windows) sum += values[window * stride + column]! ** 2;
	return Math.sqrt(sum / windows.length);
}

/** A row of analysis_series as far as it tells how many windows it holds. */
type Windows = Pick<AnalysisSeriesRow, 'interval_count'>;

/** [ORDER_STRIDE] root mean square of each order over the selected windows of one stored column of levels. */
export function ordersOver(row: Windows, levels: Buffer, windows: readonly number[]): Float64Array {
	const values = bufferToFloats(levels, row.interval_count * ORDER_STRIDE);
	return Float64Array.from({ length: ORDER_STRIDE }, (_, order) =>
		columnRms(values, windows, ORDER_STRIDE, order)
	);
}

/** True rms over the selected windows. */
export function rmsOver(row: Pick<AnalysisSeriesRow, 'rms'>, windows: readonly number[]): number {
	return columnRms(bufferToFloat64(row.rms), windows, 1, 0);
}

/**
 * Angle of the sum of an order's phasors over the windows. Meaningful because every window's angles are referred to
 * the fundamental of the same channel; NaN when the phasors cancel or one is missing.
 */
function meanAngle_deg(
	components: Float64Array,
	angles_deg: Float64Array,
	windows: readonly number[],
	order: number
): number {
	let real = 0;
	let imaginary = 0;
	for (const window of windows) {
		const at = window * ORDER_STRIDE + order;
		const angle_rad = (angles_deg[at]! * Math.PI) / 180;
		real += components[at]! * Math.cos(angle_rad);
		imaginary += components[at]! * Math.sin(angle_rad);
	}
	return real === 0 && imaginary === 0 ? NaN : (Math.atan2(imaginary, real) * 180) / Math.PI;
}

/**
 * A channel's figures over the selected windows: levels by root mean square, dc by mean, peak by maximum.
 * row           a series of kind 'window', every column read
 * windows       at least one index
 * highestOrder  orders above it were not measured
 */
export function channelValues(
	row: AnalysisSeriesRow,
	windows: readonly number[],
	highestOrder: number
): ChannelValues {
	const { components, phases_deg, dc, peak } = row;
	if (!components || !phases_deg || !dc || !peak)
		throw new Error('window values are asked of a series that is not made of windows');
	const matrices = {
		components: bufferToFloats(components, row.interval_count * ORDER_STRIDE),
		phases_deg: bufferToFloats(phases_deg, row.interval_count * ORDER_STRIDE),
		dc: bufferToFloat64(dc),
		peak: bufferToFloat64(peak)
	};
	const subgroups = ordersOver(row, row.subgroups, windows);
	const angles_deg = new Float64Array(ORDER_STRIDE);
	for (let order = 0; order < ORDER_STRIDE; order++) {
		angles_deg[order] = meanAngle_deg(matrices.components, matrices.phases_deg, windows, order);
	}
	const rms = rmsOver(row, windows);
	const greatest = windows.reduce((most, window) => Math.max(most, matrices.peak[window]!), -Infinity);
	return {
		rms,
		dc: windows.reduce((sum, window) => sum + matrices.dc[window]!, 0) / windows.length,
		peak: greatest,
		crest: crestFactor(greatest, rms),
		subgroups,
		phases_deg: angles_deg,
		thd_pctOfFundamental: thd_pctOfFundamental(subgroups, rms, highestOrder)
	};
}
