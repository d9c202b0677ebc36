/** Steps of 1, 2 or 5 times a power of ten; between eight and sixteen of them, and room beyond the greatest value. */
export function scaleForComparison(greatest: number): { end: number; step: number; ticks: number[] } {
	const target = Math.max(greatest, Number.MIN_VALUE) * 1.25;
	const decade = 10 ** Math.floor(Math.log10(target / 8));
	const step = [1, 2, 5, 10].map((m) => m * decade).find((s) => target / s <= 16) ?? 10 * decade;
	const count = Math.ceil(target / step);
	return { end: count * step, step, ticks: Array.from({ length: count }, (_, i) => i * step) };
}
