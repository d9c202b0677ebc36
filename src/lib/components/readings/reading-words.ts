import { formatNumber, formatOrdinal, NO_DATA } from '$lib/units/format';

/** A percentage without its sign, for columns whose head names it; enough digits to tell small orders apart. */
export function percentFigure(value: number | null): string {
	return value === null ? NO_DATA : formatNumber(value, { decimals: Math.abs(value) >= 100 ? 1 : 3 });
}

/** Four significant figures, for volts and amperes side by side. */
export function levelFigure(value: number | null): string {
	if (value === null) return NO_DATA;
	const magnitude = Math.abs(value);
	const decimals = magnitude >= 1000 ? 1 : magnitude >= 10 ? 2 : 3;
	// A trace below zero must not read as "-0.000".
	const rounded = Number(value.toFixed(decimals));
	return formatNumber(rounded === 0 ? 0 : rounded, { decimals });
}

/** A limit as tables print it. */
export function limitFigure(value: number | null): string {
	return value === null ? NO_DATA : formatNumber(value, { decimals: 2 });
}

export function angleFigure(value_deg: number | null): string {
	return value_deg === null ? NO_DATA : formatNumber(value_deg, { decimals: 1 });
}

interface PhaseLevels {
	label: string;
	/** Aligned with `orders`. */
	values: readonly (number | null)[];
}

/** The largest level above the fundamental, and where: what a spectrum's title states. Null without data. */
export function largestOrder(
	orders: readonly number[],
	phases: readonly PhaseLevels[]
): { order: number; label: string; value: number } | null {
	let largest: { order: number; label: string; value: number } | null = null;
	for (const phase of phases)
		for (const [i, value] of phase.values.entries())
			if (value !== null && (largest === null || value > largest.value))
				largest = { order: orders[i]!, label: phase.label, value };
	return largest;
}

/** Orders whose level on some phase is above the limit. */
export function ordersOverLimit(
	orders: readonly number[],
	phases: readonly PhaseLevels[],
	limits: readonly (number | null)[] | null
): number[] {
	if (!limits) return [];
	return orders.filter((_, i) => {
		const limit = limits[i];
		return (
			limit !== null && limit !== undefined && phases.some((phase) => (phase.values[i] ?? -Infinity) > limit)
		);
	});
}

/** "5th", "5th and 7th", "5th, 7th and 4 more". */
export function orderList(orders: readonly number[]): string {
	const words = orders.slice(0, 3).map(formatOrdinal);
	if (orders.length > 3) return `${words.slice(0, 2).join(', ')} and ${orders.length - 2} more`;
	return words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words.at(-1)}`;
}
