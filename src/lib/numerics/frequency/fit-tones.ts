/** A sum of tones of whole orders of one frequency, and a constant. */
export interface ToneFit {
	constant: number;
	orders: readonly number[];
	/** [orders] amplitude of cos and of sin of each order, phase 0 at sample 0. */
	cos: Float64Array;
	sin: Float64Array;
}

/**
 * Least-squares fit of a constant and tones of given orders to some of the samples.
 * samples   [n] any unit; NaN is left out
 * isUsed    [n] 1 where a sample counts
 * frequency cycles per sample of order 1
 * orders    distinct, ≥ 1
 * returns   null when the samples that count do not determine the tones
 * source    normal equations, solved by Cholesky's decomposition (common practice); well conditioned as long as the gaps
 *           are shorter than half a period of the highest order
 */
export function fitTones(
	samples: Float64Array,
	isUsed: Uint8Array,
	frequency: number,
	orders: readonly number[]
): ToneFit | null {
	const size = 1 + 2 * orders.length;
	const matrix = Array.from({ length: size }, () => new Float64Array(size));
	const right = new Float64Array(size);
	const basis = new Float64Array(size);
	for (let n = 0; n < samples.length; n++) {
		if (!isUsed[n] || Number.isNaN(samples[n]!)) continue;
		fillBasis(basis, orders, 2 * Math.PI * frequency * n);
		for (let i = 0; i < size; i++) {
			right[i]! += basis[i]! * samples[n]!;
			for (let j = 0; j <= i; j++) matrix[i]![j]! += basis[i]! * basis[j]!;
		}
	}
	const solution = solveByCholesky(matrix, right);
	if (!solution) return null;
	return {
		constant: solution[0]!,
		orders,
		cos: Float64Array.from(orders, (_, i) => solution[1 + 2 * i]!),
		sin: Float64Array.from(orders, (_, i) => solution[2 + 2 * i]!)
	};
}

/** The fitted sum at sample 0, 1, … count − 1. */
export function tonesOf(fit: ToneFit, frequency: number, count: number): Float64Array {
	const basis = new Float64Array(1 + 2 * fit.orders.length);
	return Float64Array.from({ length: count }, (_, n) => {
		fillBasis(basis, fit.orders, 2 * Math.PI * frequency * n);
		let sum = fit.constant;
		for (let i = 0; i < fit.orders.length; i++) {
			sum += fit.cos[i]! * basis[1 + 2 * i]! + fit.sin[i]! * basis[2 + 2 * i]!;
		}
		return sum;
	});
}

function fillBasis(basis: Float64Array, orders: readonly number[], angle: number): void {
	basis[0] = 1;
	for (let i = 0; i < orders.length; i++) {
		basis[1 + 2 * i] = Math.cos(orders[i]! * angle);
		basis[2 + 2 * i] = Math.sin(orders[i]! * angle);
	}
}

/** Solves a symmetric system given by its lower triangle, which is overwritten; null when it is not positive definite. */
function solveByCholesky(lower: Float64Array[], right: Float64Array): Float64Array | null {
	const size = right.length;
	for (let i = 0; i < size; i++) {
		const whole = lower[i]![i]!;
		for (let j = 0; j <= i; j++) {
			let value = lower[i]![j]!;
			for (let k = 0; k < j; k++) value -= lower[i]![k]! * lower[j]![k]!;
			if (j < i) lower[i]![j] = value / lower[j]![j]!;
			else if (value > 1e-9 * whole) lower[i]![i] = Math.sqrt(value);
			else return null;
		}
	}
	const solution = right.slice();
	for (let i = 0; i < size; i++) {
		for (let k = 0; k < i; k++) solution[i]! -= lower[i]![k]! * solution[k]!;
		solution[i]! /= lower[i]![i]!;
	}
	for (let i = size - 1; i >= 0; i--) {
		for (let k = i + 1; k < size; k++) solution[i]! -= lower[k]![i]! * solution[k]!;
		solution[i]! /= lower[i]![i]!;
	}
	return solution;
}
