/** Greatest absolute value over rms; √2 for a sine. NaN when there is no signal. */
export function crestFactor(peak: number, rms: number): number {
	return rms > 0 ? peak / rms : NaN;
}
