/**
 * Root-sum-square of the orders from … to of one row.
 * row      values by order, index = order, V or A
 * returns  same unit; NaN when any order of the range is missing: an absent order is not zero
 */
export function harmonicContent(row: Float64Array, fromOrder: number, toOrder: number): number {
	if (toOrder < fromOrder) return NaN;
	let sum = 0;
	for (let order = fromOrder; order <= toOrder; order++) {
		const value = row[order];
		if (value === undefined) return NaN;
		sum += value * value;
	}
	return Math.sqrt(sum);
}

/** Below this share of the channel's rms a fundamental is taken for absent. */
const LEAST_FUNDAMENTAL = 1e-4;

/** Whether one row of levels holds a fundamental that percentages can stand on; false for no data. */
export function hasFundamental(row: Float64Array, rms: number): boolean {
	return row[1]! > LEAST_FUNDAMENTAL * rms;
}

/**
 * Total distortion in percent of the fundamental; of subgroups it is THDS, of lines THD.
 * row        values by order of one window, index = order
 * rms        true rms of the same window; decides whether there is a fundamental at all
 * toOrder    highest order summed (50 for IEEE Std 519 and class A, 40 for EN 50160)
 * returns    percent; NaN when there is no fundamental or an order is missing
 * source     IEC 61000-4-7:2002+A1:2008, 3.3 (from memory)
 */
export function thd_pctOfFundamental(row: Float64Array, rms: number, toOrder: number): number {
	if (!hasFundamental(row, rms)) return NaN;
	return (100 * harmonicContent(row, 2, toOrder)) / row[1]!;
}

/**
 * Total demand distortion: the harmonic content of the current in percent of the maximum demand load current.
 * row_A            current by order, index = order; interharmonics stay out
 * demandCurrent_A  I_L, > 0
 * toOrder          50 in IEEE Std 519
 * source           IEEE Std 519-2014 and -2022, clause 3
 */
export function tdd_pctOfDemandCurrent(
	row_A: Float64Array,
	demandCurrent_A: number,
	toOrder: number
): number {
	if (!(demandCurrent_A > 0)) return NaN;
	return (100 * harmonicContent(row_A, 2, toOrder)) / demandCurrent_A;
}

/** Distortion on the rms from that on the fundamental, both in percent: THD_R = THD_F/√(1+THD_F²). */
export function thd_pctOfRms(onFundamental_pct: number): number {
	const ratio = onFundamental_pct / 100;
	return (100 * ratio) / Math.sqrt(1 + ratio * ratio);
}

/**
 * Partial weighted harmonic distortion in percent of the fundamental: √Σ h·(Y_h/Y_1)². The weight is h, not h².
 * source  IEC 61000-4-7:2002+A1:2008, 3.3, and IEC 61000-3-12 with orders 14 … 40 (from memory)
 */
export function pwhd_pctOfFundamental(row: Float64Array, fromOrder = 14, toOrder = 40): number {
	const fundamental = row[1]!;
	if (!(fundamental > 0)) return NaN;
	let sum = 0;
	for (let order = fromOrder; order <= toOrder; order++) sum += order * row[order]! ** 2;
	return (100 * Math.sqrt(sum)) / fundamental;
}

/** Orders above the fundamental of one kind: odd, even, or triplen (every multiple of three). */
export type OrderFamily = 'odd' | 'even' | 'triplen';

const BELONGS: Record<OrderFamily, (order: number) => boolean> = {
	odd: (order) => order % 2 === 1,
	even: (order) => order % 2 === 0,
	triplen: (order) => order % 3 === 0
};

/**
 * Root-sum-square of the orders of one family from 2 to `toOrder`, unit of the row; NaN when one of them is missing.
 * The families overlap: order 9 is odd and triplen.
 */
export function familyContent(row: Float64Array, family: OrderFamily, toOrder: number): number {
	let sum = 0;
	for (let order = 2; order <= toOrder; order++) if (BELONGS[family](order)) sum += row[order]! ** 2;
	return Math.sqrt(sum);
}

/**
 * Partial odd harmonic current: odd orders 21 … 39, unit of the row; NaN when one is missing.
 * source  IEC 61000-3-2 (from memory)
 */
export function partialOddCurrent(row: Float64Array): number {
	let sum = 0;
	for (let order = 21; order <= 39; order += 2) sum += row[order]! ** 2;
	return Math.sqrt(sum);
}
