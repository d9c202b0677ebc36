/**
 * Greatest deviation of three line-to-line voltages from their mean, in percent of the mean. Not the negative-sequence
 * factor: the two are not judged against one limit.
 * returns  NaN without a mean
 * source   NEMA MG 1, voltage unbalance (definition as quoted publicly)
 */
export function lineVoltageDeviation_pct(u12: number, u23: number, u31: number): number {
	const mean = (u12 + u23 + u31) / 3;
	if (!(mean > 0)) return NaN;
	return (100 * Math.max(Math.abs(u12 - mean), Math.abs(u23 - mean), Math.abs(u31 - mean))) / mean;
}
