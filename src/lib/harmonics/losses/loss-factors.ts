/** Sum of h^q·I_h² from order 1 to `toOrder`; NaN when an order is missing. */
function weightedSquares(row_A: Float64Array, exponent: number, toOrder: number): number {
	let sum = 0;
	for (let order = 1; order <= toOrder; order++) sum += order ** exponent * row_A[order]! ** 2;
	return sum;
}

/**
 * Harmonic loss factor for winding eddy-current losses: Σh²I_h²/ΣI_h². It does not depend on the rated current.
 * row_A    current by order, index = order; dc stays out
 * toOrder  highest order counted; the factor grows with it (a 1/h spectrum adds 1 per order), so it has to be stated
 * returns  ≥ 1; NaN when an order is missing or there is no current
 * source   IEEE Std C57.110-2018 (from memory); conservative above about order 19 to 25, where skin effect limits h²
 */
export function eddyLossFactor(row_A: Float64Array, toOrder: number): number {
	return weightedSquares(row_A, 2, toOrder) / weightedSquares(row_A, 0, toOrder);
}

/**
 * Harmonic loss factor for other stray losses (liquid-filled transformers): Σh^0.8·I_h²/ΣI_h².
 * source  IEEE Std C57.110-2018 (from memory); terms as eddyLossFactor
 */
export function strayLossFactor(row_A: Float64Array, toOrder: number): number {
	return weightedSquares(row_A, 0.8, toOrder) / weightedSquares(row_A, 0, toOrder);
}

/**
 * K-factor of a load on a transformer: Σh²(I_h/I_R)².
 * ratedCurrent_A  I_R, rated rms current of the winding, > 0; at rated rms K equals the eddy loss factor
 * source          UL 1561 and UL 1562 (from memory)
 */
export function kFactor(row_A: Float64Array, ratedCurrent_A: number, toOrder: number): number {
	return ratedCurrent_A > 0 ? weightedSquares(row_A, 2, toOrder) / ratedCurrent_A ** 2 : NaN;
}

/** Marked K ratings (UL 1561 and UL 1562, read in secondary pages). */
export const K_RATINGS = [1, 4, 9, 13, 20, 30, 40, 50] as const;

/** The smallest marked rating that is not below the load's K; null above the greatest, and for no data. */
export function kRatingFor(factor: number): number | null {
	return K_RATINGS.find((rating) => rating >= factor) ?? null;
}

/**
 * Permissible rms current of a dry-type transformer, per unit of rated: √((1 + P_EC-R)/(1 + F_HL·P_EC-R)).
 * eddyLoss_pu  P_EC-R, rated eddy loss per unit of the local I²R at the hottest spot, > 0
 * source       IEEE Std C57.110-2018 (from memory)
 */
export function permissibleCurrent_pu(lossFactor: number, eddyLoss_pu: number): number {
	return Math.sqrt((1 + eddyLoss_pu) / (1 + lossFactor * eddyLoss_pu));
}

/**
 * Factor K by which a transformer's power is divided under harmonic load. It is near 1 and is not the K of UL 1561.
 * eddyShare  e: eddy-current loss at the fundamental over the dc loss, both at reference temperature; 0.1 where unknown
 *            (common practice)
 * exponent   q: 1.7 for round or rectangular conductors in both windings, 1.5 for foil on the low-voltage side
 * source     EN 50541-1 and -2, earlier HD 538.3 (from memory)
 */
export function loadFactorK(
	row_A: Float64Array,
	eddyShare: number,
	exponent: 1.5 | 1.7,
	toOrder: number
): number {
	let harmonics = 0;
	let all = 0;
	const fundamental = row_A[1]! ** 2;
	for (let order = 1; order <= toOrder; order++) {
		const square = row_A[order]! ** 2;
		all += square;
		if (order > 1) harmonics += order ** exponent * (square / fundamental);
	}
	return Math.sqrt(1 + (eddyShare / (1 + eddyShare)) * (fundamental / all) * harmonics);
}
