/** Steps of 1, 2 or 5 times a power of ten; at most `mostSteps` of them, and room beyond the greatest value. */
export function scaleForComparison(
	greatest: number,
	mostSteps = 16
): { end: number; step: number; ticks: number[] } {
	const target = Math.max(greatest, Number.MIN_VALUE) * 1.25;
	const decade = 10 ** Math.floor(Math.log10(target / mostSteps));
	const step = [1, 2, 5, 10].map((m) => m * decade).find((s) => target / s <= mostSteps) ?? 10 * decade;
	const count = Math.ceil(target / step);
	return { end: count * step, step, ticks: Array.from({ length: count }, (_, i) => i * step) };
}

interface LabelPlace {
	x: number;
	anchor: 'start' | 'end';
}

/** Widest label that occurs, "measured 12.34 %", at 13 px. */
const LABEL_PX = 112;

/**
 * Where the two labels stand so that they neither touch nor leave the figure: in one line if they can, else in two.
 * Positions in px along the scale.
 */
export function placeLabels(
	allowed_px: number,
	measured_px: number,
	width_px: number
): { stacked: boolean; allowed: LabelPlace; measured: LabelPlace } {
	const before = (x: number): LabelPlace => ({ x: x - 7, anchor: 'end' });
	const after = (x: number): LabelPlace => ({ x: x + 7, anchor: 'start' });
	const fitsAfter = (x: number) => x + 7 + LABEL_PX <= width_px;
	if (measured_px >= allowed_px && allowed_px >= LABEL_PX) {
		if (measured_px - allowed_px > LABEL_PX)
			return { stacked: false, allowed: before(allowed_px), measured: { x: measured_px, anchor: 'end' } };
		if (fitsAfter(allowed_px))
			return { stacked: false, allowed: before(allowed_px), measured: after(allowed_px) };
	}
	if (measured_px < allowed_px && measured_px >= LABEL_PX && fitsAfter(allowed_px)) {
		const at = Math.min(measured_px, allowed_px - 7);
		return { stacked: false, allowed: after(allowed_px), measured: { x: at, anchor: 'end' } };
	}
	const side = (x: number) => (x > width_px / 2 ? before(x) : after(x));
	return { stacked: true, allowed: side(allowed_px), measured: side(measured_px) };
}

/** Digits after the point, more where two different figures would read the same. */
export function telling(digits: number, allowed: number, measured: number): number {
	const MOST_DIGITS = 4;
	let enough = digits;
	while (allowed !== measured && enough < MOST_DIGITS && allowed.toFixed(enough) === measured.toFixed(enough))
		enough++;
	return enough;
}
