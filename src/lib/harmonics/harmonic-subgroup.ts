/**
 * Harmonic subgroup: the line of the order with its two neighbours.
 * squares    [> orderLine + 1] squares of the one-sided rms lines (numerics/dft/convention.md), V² or A²
 * orderLine  line of the order, N·h, ≥ 1
 * returns    rms, V or A; any NaN gives NaN
 * source     IEC 61000-4-7:2002+A1:2008, 3.2.4 and 5.6 (from memory)
 */
export function harmonicSubgroup(squares: Float64Array, orderLine: number): number {
	return Math.sqrt(squares[orderLine - 1]! + squares[orderLine]! + squares[orderLine + 1]!);
}
