/** Significant digits of every figure in the document: more than any instrument has, fewer than binary fractions show. */
export const SIGNIFICANT_DIGITS = 9;
/** Share of a channel's rms below which a level is the noise of the arithmetic. */
const ARITHMETIC_NOISE = 1e-12;
/** Below this share of the rms a line has no angle worth giving. */
const LEAST_WITH_ANGLE = 1e-9;

/** A figure as the document gives it: nine significant digits; null for "no data" and for infinities. */
export function rounded(value: number | null): number | null {
	if (value === null || !Number.isFinite(value)) return null;
	return Number(value.toPrecision(SIGNIFICANT_DIGITS)) + 0;
}

/** A level of a channel: as `rounded`, in steps of 1e-12 of the rms at the finest. */
export function roundedLevel(value: number, rms: number): number | null {
	const step = rms * ARITHMETIC_NOISE;
	if (!(step > 0) || !Number.isFinite(value)) return rounded(value);
	return rounded(Math.round(value / step) * step);
}

/** An angle in steps of a millionth of a degree, (−180, 180]; null where the line is not there. */
export function roundedAngle_deg(angle_deg: number, line: number, rms: number): number | null {
	if (!Number.isFinite(angle_deg) || !(line > LEAST_WITH_ANGLE * rms)) return null;
	const stepped = Math.round(angle_deg * 1e6) / 1e6 + 0;
	return stepped === -180 ? 180 : stepped;
}
