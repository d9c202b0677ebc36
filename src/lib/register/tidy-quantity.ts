import { parseQuantity, type QuantityKind } from '../units/quantity-input';

/** Scales a figure is shown back in, largest first, per kind of quantity; others are shown in their base unit. */
const SCALES: Partial<Record<QuantityKind, readonly [from: number, divisor: number, unit: string][]>> = {
	voltage: [
		[1e3, 1e3, 'kV'],
		[0, 1, 'V']
	],
	// Amperes up to 10 kA, as the trade writes demand currents.
	current: [
		[1e4, 1e3, 'kA'],
		[0, 1, 'A']
	],
	'apparent-power': [
		[1e7, 1e6, 'MVA'],
		[1e3, 1e3, 'kVA'],
		[0, 1, 'VA']
	],
	'fault-level': [
		[1e6, 1e6, 'MVA'],
		[1e3, 1e3, 'kVA'],
		[0, 1, 'VA']
	],
	'active-power': [
		[1e7, 1e6, 'MW'],
		[1e3, 1e3, 'kW'],
		[0, 1, 'W']
	],
	percent: [[0, 1, '%']],
	number: [[0, 1, '']]
};

/**
 * Digits that are kept: enough for any figure typed by hand, few enough to drop the binary tail that scaling leaves
 * (5.1 kV must not come back as 5.1000000000000005 kV).
 */
const DIGITS = 12;

/** The figure as it was typed: 69 kV must be 69 000 V to the last digit, or a voltage band's bound is missed. */
export function withoutBinaryTail(value: number): number {
	return Number(value.toPrecision(DIGITS));
}

function plainDecimal(value: number): string {
	const rounded = withoutBinaryTail(value);
	const shortest = String(rounded);
	return shortest.includes('e') ? rounded.toFixed(DIGITS).replace(/\.?0+$/, '') : shortest;
}

/** A kept quantity as it is put into its field: "13.8 kV" for 13 800 V. Reading it again gives the same figure. */
export function tidyQuantity(kind: QuantityKind, value: number): string {
	const [, divisor, unit] = SCALES[kind]?.find(([from]) => Math.abs(value) >= from) ?? [0, 1, ''];
	return `${plainDecimal(value / divisor)} ${unit}`.trim();
}

/** What was typed, in tidy form: "13.8kv" becomes "13.8 kV". Text that cannot be read stays as it is. */
export function tidyText(kind: QuantityKind, text: string): string {
	if (text.trim() === '') return '';
	const parsed = parseQuantity(kind, text);
	return parsed.ok && parsed.value >= 0 ? tidyQuantity(kind, parsed.value) : text;
}
