/**
 * A tenth of the limit of class I, in the unit of the reading: 5 % of readings from 1 % of nominal on, 0.05 % of nominal below.
 * source  IEC 61000-4-7:2002+A1:2008, table 1 (from memory)
 */
export function tenthOfClassI(reading: number, nominal: number): number {
	return reading >= 0.01 * nominal ? 0.005 * reading : 0.00005 * nominal;
}
