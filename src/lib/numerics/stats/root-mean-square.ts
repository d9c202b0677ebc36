/**
 * Root of the mean of the squares, with compensated summation.
 * values   [n] in any one unit
 * from,to  half-open range of indices; the whole array when left out
 * returns  rms in the same unit; NaN for an empty range and for any NaN inside it: nothing is left out silently
 * source   aggregation of IEC 61000-4-30:2015, 4.5, and definition of the rms value
 */
export function rootMeanSquare(values: Float64Array, from = 0, to = values.length): number {
	if (to <= from) return NaN;
	let sum = 0;
	let lost = 0;
	for (let i = from; i < to; i++) {
		const square = values[i]! * values[i]!;
		const next = sum + square;
		lost += sum >= square ? sum - next + square : square - next + sum;
		sum = next;
	}
	return Math.sqrt((sum + lost) / (to - from));
}
