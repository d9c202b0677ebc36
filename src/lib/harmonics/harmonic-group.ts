/**
 * Harmonic group: all lines half way to either neighbouring order, the outermost two counted with half of their square.
 * lines            [> orderLine + cyclesPerWindow/2] one-sided rms lines, V or A
 * orderLine        line of the order, N·h
 * cyclesPerWindow  N: 10 at 50 Hz, 12 at 60 Hz; even
 * returns          rms in the unit of the lines; any NaN gives NaN
 * source           IEC 61000-4-7:2002+A1:2008, 3.2.3 and 5.5.1, equation 8 (from memory)
 */
export function harmonicGroup(lines: Float64Array, orderLine: number, cyclesPerWindow: 10 | 12): number {
	const half = cyclesPerWindow / 2;
	let sum = (lines[orderLine - half]! ** 2 + lines[orderLine + half]! ** 2) / 2;
	for (let k = 1 - half; k < half; k++) sum += lines[orderLine + k]! ** 2;
	return Math.sqrt(sum);
}
