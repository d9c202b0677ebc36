/**
 * Single-frequency weights of telephone influence by order at 60 Hz. Orders that the table leaves out are absent, not zero.
 * source  EEI and Bell system weights of 1960, as tabulated in IEEE Std 519-1992 (a secondary listing was read; it prints
 *         8330 at order 35, where the constant ratio of its neighbours demands 8830)
 */
const WEIGHTS_60HZ: Readonly<Record<number, number>> = {
	1: 0.5,
	3: 30,
	5: 225,
	6: 400,
	7: 650,
	9: 1320,
	11: 2260,
	12: 2760,
	13: 3360,
	15: 4350,
	17: 5100,
	18: 5400,
	19: 5630,
	21: 6050,
	23: 6370,
	24: 6650,
	25: 6680,
	27: 6970,
	29: 7320,
	30: 7570,
	31: 7820,
	33: 8330,
	35: 8830,
	36: 9080,
	37: 9330,
	39: 9840,
	41: 10340,
	43: 10600,
	47: 10210,
	49: 9820,
	50: 9670
};

/** Frequency, Hz, and C-message weight P = W/(5·f) of the tabulated points. */
const C_MESSAGE = Object.entries(WEIGHTS_60HZ).map(([order, weight]) => {
	const frequency_Hz = 60 * Number(order);
	return { frequency_Hz, weight: weight / (5 * frequency_Hz) };
});

/**
 * Weight W of one frequency: 5·P·f with P interpolated on straight lines between the tabulated frequencies.
 * returns  NaN outside 60 … 3000 Hz, where the table says nothing (50 Hz takes the weight of 60 Hz's P)
 * source   W = 5·P·f: Ball & Poarch, AIEE 1960 (from memory)
 */
export function telephoneWeight(frequency_Hz: number): number {
	const first = C_MESSAGE[0]!;
	if (frequency_Hz <= first.frequency_Hz && frequency_Hz >= 45) return 5 * first.weight * frequency_Hz;
	const above = C_MESSAGE.findIndex((point) => point.frequency_Hz >= frequency_Hz);
	if (above < 1) return NaN;
	const low = C_MESSAGE[above - 1]!;
	const high = C_MESSAGE[above]!;
	const share = (frequency_Hz - low.frequency_Hz) / (high.frequency_Hz - low.frequency_Hz);
	return 5 * (low.weight + share * (high.weight - low.weight)) * frequency_Hz;
}

/**
 * Telephone influence product √Σ(W_h·X_h)²: I·T of a current in A, V·T of a voltage in V. Give the phase currents for the
 * balanced product, three times the zero sequence by order for the residual one: they are two quantities.
 * row             rms by order, index = order
 * fundamental_Hz  the nominal one: a measured 60.01 Hz would put order 50, one of the heaviest, beyond the table
 * toOrder         highest order counted; orders beyond 3000 Hz carry no weight and are not counted
 * returns         unit of the row; NaN when an order is missing
 * source          IEEE Std 519-1992, telephone interference (from memory)
 */
export function telephoneProduct(row: Float64Array, fundamental_Hz: number, toOrder: number): number {
	let sum = 0;
	for (let order = 1; order <= toOrder; order++) {
		const weight = telephoneWeight(order * fundamental_Hz);
		if (Number.isNaN(weight)) break;
		sum += (weight * row[order]!) ** 2;
	}
	return Math.sqrt(sum);
}

/** Telephone influence factor: the product over the rms of the same orders, without unit. */
export function telephoneInfluenceFactor(row: Float64Array, fundamental_Hz: number, toOrder: number): number {
	let square = 0;
	for (let order = 1; order <= toOrder; order++) square += row[order]! ** 2;
	return telephoneProduct(row, fundamental_Hz, toOrder) / Math.sqrt(square);
}
