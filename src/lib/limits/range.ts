import type { Range } from './limit-set';

/**
 * Whether a value lies in a range whose printed bounds may or may not belong to it.
 * value     any finite number in the unit of the range; NaN lies in no range that has a bound
 * returns   true for an open side; `inclusive` decides at the bound itself
 */
export function rangeContains(range: Range, value: number): boolean {
	const { lower, upper } = range;
	const aboveLower = lower === null || value > lower.value || (lower.inclusive && value === lower.value);
	const belowUpper = upper === null || value < upper.value || (upper.inclusive && value === upper.value);
	return aboveLower && belowUpper;
}

/** "above 1 up to and including 69 kV": the bounds in words, for sentences and the library. */
export function describeRange(range: Range, unit = ''): string {
	const suffix = unit === '' ? '' : ` ${unit}`;
	const { lower, upper } = range;
	if (lower !== null && upper !== null && lower.value === upper.value) return `${lower.value}${suffix}`;
	// A lower bound of zero says nothing about a magnitude.
	const from =
		lower === null || lower.value === 0 ? '' : `${lower.inclusive ? 'from' : 'above'} ${lower.value}`;
	const to = upper === null ? '' : `${upper.inclusive ? 'up to and including' : 'below'} ${upper.value}`;
	if (from === '' && to === '') return 'all';
	return [from, to].filter((part) => part !== '').join(' ') + suffix;
}
