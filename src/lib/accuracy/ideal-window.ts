import { executeRealDft, planRealDft } from '../numerics/dft/real-dft';
import { MAX_ORDER, ORDER_STRIDE } from '../harmonics/intervals';
import { cyclesAt, instantOf, valueFunction, type ExactChannel, type ExactSignal } from './exact-signal';

/** Points of the ideal transform: orders to 800, far above anything that the signals hold. */
const POINTS = 16_384;
const plan = planRealDft(POINTS);
const block = new Float64Array(POINTS);

export interface IdealWindow {
	length_s: number;
	/** [ORDER_STRIDE] */
	components: Float64Array;
	/** [ORDER_STRIDE] */
	subgroups: Float64Array;
}

/**
 * What a perfectly synchronised transform gives: exactly N cycles of the exact fundamental from `start_s`, sampled from
 * the exact signal at 16 384 even instants, without window; subgroups by the definition.
 * source  IEC 61000-4-7:2002+A1:2008, 3.2.4 and 5.6 (from memory)
 */
export function idealWindow(
	signal: ExactSignal,
	channel: ExactChannel,
	start_s: number,
	cycles: 10 | 12
): IdealWindow {
	const end_s = instantOf(signal, cyclesAt(signal, start_s) + cycles);
	const length_s = end_s - start_s;
	const valueAt = valueFunction(signal, channel);
	for (let m = 0; m < POINTS; m++) block[m] = valueAt(start_s + (m * length_s) / POINTS);
	executeRealDft(plan, block);
	const squareOf = (line: number) =>
		2 * ((plan.spectrum[2 * line]! / POINTS) ** 2 + (plan.spectrum[2 * line + 1]! / POINTS) ** 2);
	const components = new Float64Array(ORDER_STRIDE);
	const subgroups = new Float64Array(ORDER_STRIDE);
	for (let order = 1; order <= MAX_ORDER; order++) {
		const line = cycles * order;
		components[order] = Math.sqrt(squareOf(line));
		subgroups[order] = Math.sqrt(squareOf(line - 1) + squareOf(line) + squareOf(line + 1));
	}
	return { length_s, components, subgroups };
}
