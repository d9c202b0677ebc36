import { formatNumber, NO_DATA, type FormatOptions } from './format';

/** A double carries about 16 significant digits; beyond this, more decimals would only print its binary tail. */
const MOST_DECIMALS = 15;

/**
 * Decimals at which a value and the figure it is compared with still print in their true order: rounding may
 * never make an exceedance look like a pass, nor a pass like a value on the limit.
 * value, reference  unrounded, same unit; missing data give the decimals asked for
 * returns           at least `decimals`, at most 15
 */
export function decimalsBeside(value: number, reference: number, decimals = 2): number {
	if (!Number.isFinite(value) || !Number.isFinite(reference) || value === reference) return decimals;
	let digits = decimals;
	while (digits < MOST_DECIMALS && value.toFixed(digits) === reference.toFixed(digits)) digits += 1;
	return digits;
}

export interface ComparedText {
	value: string;
	reference: string;
}

/**
 * A value and its limit as text, both with the same decimals: "7.004 %" and "7.000 %", never two times "7.00 %"
 * when they differ. Either may be missing.
 */
export function formatPctPair(
	value: number | null | undefined,
	reference: number | null | undefined,
	options: FormatOptions = {}
): ComparedText {
	const bothKnown = typeof value === 'number' && typeof reference === 'number';
	const decimals = bothKnown ? decimalsBeside(value, reference, options.decimals) : options.decimals;
	const print = (figure: number | null | undefined) => {
		const text = formatNumber(figure, { ...options, decimals });
		return text === NO_DATA ? text : `${text}\u00a0%`;
	};
	return { value: print(value), reference: print(reference) };
}
