/**
 * Harmonic group: all lines half way to either neighbouring order, the outermost two counted with half of their square.
 * squares          [> orderLine + cyclesPerWindow/2] squares of the one-sided rms lines, V² or A²
 * orderLine        line of the order, N·h
 * cyclesPerWindow  N: 10 at 50 Hz, 12 at 60 Hz; even
 * returns          rms, V or A; any NaN gives NaN
 * source           IEC 61000-4-7:2002+A1:2008, 3.2.3 and 5.5.1, equation 8 (from memory)
 */
export function harmonicGroup(squares: Float64Array, orderLine: number, cyclesPerWindow: 10 | 12): number {
	const half = cyclesPerWindow / 2;
	let sum = (squares[orderLine - half]! + squares[orderLine + half]!) / 2;
	for (let k = orderLine + 1 - half; k < orderLine + half; k++) sum += squares[k]!;
	return Math.sqrt(sum);
}
