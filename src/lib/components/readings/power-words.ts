import { formatNumber, NO_DATA } from '$lib/units/format';

export interface PowerScale {
	/** 'W', 'var' or 'VA' with its prefix. */
	unit: (base: 'W' | 'var' | 'VA') => string;
	figure: (value: number | null) => string;
}

/** One prefix for all figures of a table, from the greatest of them, so that columns can be compared. */
export function powerScale(values: readonly (number | null | undefined)[]): PowerScale {
	const greatest = Math.max(0, ...values.map((value) => Math.abs(value ?? 0)));
	const [scale, prefix] = greatest >= 1e6 ? [1e6, 'M'] : greatest >= 1e3 ? [1e3, 'k'] : [1, ''];
	return {
		unit: (base) => `${prefix}${base}`,
		figure: (value) => {
			if (value === null) return NO_DATA;
			const rounded = Number((value / scale).toFixed(3));
			return formatNumber(rounded === 0 ? 0 : rounded, { decimals: 3 });
		}
	};
}

/** A factor between −1 and 1. */
export function factorFigure(value: number | null): string {
	return value === null ? NO_DATA : formatNumber(value, { decimals: 4 });
}

/** Power of one order, W or var: small ones keep their digits. */
export function orderPowerFigure(value: number | null): string {
	if (value === null) return NO_DATA;
	const magnitude = Math.abs(value);
	const rounded = Number(value.toFixed(magnitude >= 1000 ? 0 : magnitude >= 10 ? 1 : 3));
	return formatNumber(rounded === 0 ? 0 : rounded, {
		decimals: magnitude >= 1000 ? 0 : magnitude >= 10 ? 1 : 3
	});
}
