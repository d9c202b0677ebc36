/**
 * Interharmonic centred subgroup between an order and the next: the lines between, without the two nearest to each order.
 * squares          [> orderLine + cyclesPerWindow − 2] squares of the one-sided rms lines, V² or A²
 * orderLine        line of the lower order, N·h; 0 for what lies below the fundamental
 * cyclesPerWindow  N: 10 at 50 Hz (7 lines), 12 at 60 Hz (9 lines)
 * returns          rms, V or A; any NaN gives NaN
 * source           IEC 61000-4-7:2002+A1:2008, 3.4 and annex A (from memory)
 */
export function interharmonicCentredSubgroup(
	squares: Float64Array,
	orderLine: number,
	cyclesPerWindow: 10 | 12
): number {
	return rootOfSum(squares, orderLine + 2, orderLine + cyclesPerWindow - 2);
}

/** Interharmonic group: every line strictly between an order and the next (9 or 11 lines); same source and terms. */
export function interharmonicGroup(
	squares: Float64Array,
	orderLine: number,
	cyclesPerWindow: 10 | 12
): number {
	return rootOfSum(squares, orderLine + 1, orderLine + cyclesPerWindow - 1);
}

function rootOfSum(squares: Float64Array, from: number, to: number): number {
	let sum = 0;
	for (let k = from; k <= to; k++) sum += squares[k]!;
	return Math.sqrt(sum);
}
