import { INK, INK_SOFT, TONE } from './print-style';

export interface ComparedFigure {
	allowed_pct: number;
	measured_pct: number;
	/** Already formatted, so that the drawing and the sentence beside it print the same digits. */
	allowedText: string;
	measuredText: string;
	tone: 'verdigris' | 'ochre' | 'oxide';
}

/** 1, 2 or 5 times a power of ten: about ten ticks over the span. */
function tickStep(span: number): number {
	const raw = span / 10;
	const power = 10 ** Math.floor(Math.log10(raw));
	const lead = raw / power;
	return (lead <= 1 ? 1 : lead <= 2 ? 2 : lead <= 5 ? 5 : 10) * power;
}

/** What is allowed and what was measured, on one scale, as SVG text. */
export function allowedMeasuredSvg(figure: ComparedFigure, width: number): string {
	const step = tickStep(Math.max(figure.allowed_pct, figure.measured_pct) * 1.15);
	const end = Math.ceil((Math.max(figure.allowed_pct, figure.measured_pct) * 1.12) / step) * step;
	const x = (value: number): number => 1 + (value / end) * (width - 14);
	const at = (value: number): string => x(value).toFixed(2);
	const inside = Math.min(figure.allowed_pct, figure.measured_pct);
	const over = figure.measured_pct > figure.allowed_pct;
	const tone = TONE[figure.tone].text;
	const inner = figure.tone === 'ochre' ? TONE.ochre.text : TONE.verdigris.text;
	const ticks = Array.from({ length: Math.round(end / step) + 1 }, (_, i) => i * step);
	const label = (value: number): string => String(Number(value.toFixed(6)));
	const allowedAnchor = over ? 'end' : 'start';
	const allowedAt = over ? x(figure.allowed_pct) - 5 : x(figure.allowed_pct) + 5;
	// Both labels above the bar: on either side of the limit's line, they cannot meet.
	const measuredAt = over
		? Math.max(x(figure.measured_pct), x(figure.allowed_pct) + 100)
		: Math.min(x(figure.allowed_pct) - 5, Math.max(x(figure.measured_pct), 96));
	const text = (cx: number, y: number, anchor: string, colour: string, words: string, size = 9): string =>
		`<text x="${cx.toFixed(2)}" y="${y}" text-anchor="${anchor}" font-family="IBM Plex Sans" font-size="${size}" fill="${colour}">${words}</text>`;
	return [
		`<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${width} 64" width="${width}" height="64">`,
		text(Math.max(allowedAt, over ? 60 : 0), 11, allowedAnchor, INK, `allowed ${figure.allowedText}`),
		text(measuredAt, 11, 'end', tone, `measured ${figure.measuredText}`),
		`<rect x="${at(0)}" y="18" width="${(x(inside) - x(0)).toFixed(2)}" height="13" fill="${inner}"/>`,
		over
			? `<rect x="${at(figure.allowed_pct)}" y="18" width="${(x(figure.measured_pct) - x(figure.allowed_pct)).toFixed(2)}" height="13" fill="${tone}"/>`
			: '',
		`<line x1="${at(figure.allowed_pct)}" x2="${at(figure.allowed_pct)}" y1="8" y2="44" stroke="${INK}" stroke-width="1.6"/>`,
		`<line x1="${at(0)}" x2="${at(end)}" y1="44" y2="44" stroke="${INK}" stroke-width="1.1"/>`,
		...ticks.map(
			(tick) => `<line x1="${at(tick)}" x2="${at(tick)}" y1="38" y2="44" stroke="${INK}" stroke-width="0.7"/>`
		),
		...ticks.map((tick) => text(x(tick), 56, tick === 0 ? 'start' : 'middle', INK_SOFT, label(tick), 7.5)),
		'</svg>'
	].join('');
}
