/**
 * Sum with a running compensation for the digits lost at each addition.
 * values   [n] any finite values, n may be 0
 * returns  sum; 0 for an empty array; any NaN gives NaN
 * error    2 ulp of the exact sum plus O(n·ulp²·Σ|x|); the order of summation is fixed, so the same input gives the same digits
 * source   Neumaier, ZAMM 54, 1974 (improved Kahan–Babuška summation)
 */
export function compensatedSum(values: Float64Array): number {
	let sum = 0;
	let lost = 0;
	for (let i = 0; i < values.length; i++) {
		const value = values[i]!;
		const next = sum + value;
		lost += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
		sum = next;
	}
	return sum + lost;
}
