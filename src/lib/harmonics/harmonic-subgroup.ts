/**
 * Harmonic subgroup: the line of the order with its two neighbours.
 * lines      [> orderLine + 1] one-sided rms lines (numerics/dft/convention.md), V or A
 * orderLine  line of the order, N·h, ≥ 1
 * returns    rms in the unit of the lines; any NaN gives NaN
 * source     IEC 61000-4-7:2002+A1:2008, 3.2.4 and 5.6 (from memory)
 */
export function harmonicSubgroup(lines: Float64Array, orderLine: number): number {
	const below = lines[orderLine - 1]!;
	const at = lines[orderLine]!;
	const above = lines[orderLine + 1]!;
	return Math.sqrt(below * below + at * at + above * above);
}
