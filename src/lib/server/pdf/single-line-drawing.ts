import { formatCurrent, formatVoltage } from '../../units/format';
import type { ReportPoint } from '../../report/report-model';
import { COPPER, INK, INK_SOFT } from './print-style';

const escape = (text: string): string =>
	text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;');

function label(
	x: number,
	y: number,
	words: string,
	options: { bold?: boolean; soft?: boolean; anchor?: string; colour?: string } = {}
): string {
	const colour = options.colour ?? (options.soft ? INK_SOFT : INK);
	return (
		`<text x="${x}" y="${y}" font-family="IBM Plex Sans" font-size="8" fill="${colour}" text-anchor="${options.anchor ?? 'middle'}"` +
		`${options.bold ? ' font-weight="bold"' : ''}>${escape(words)}</text>`
	);
}

const line = (x1: number, y1: number, x2: number, y2: number, width = 1, colour = INK): string =>
	`<line x1="${x1}" y1="${y1}" x2="${x2}" y2="${y2}" stroke="${colour}" stroke-width="${width}"/>`;

/** Supply, the measured bus and the installation behind it: a sketch to find the place, no wiring diagram. */
export function singleLineSvg(point: ReportPoint, utility: string, width: number): string {
	const bus = Math.round(width * 0.47);
	const mid = 62;
	const load = width - 96;
	const inPlant = point.kind === 'in-plant';
	const source =
		point.shortCircuitCurrent_A === null
			? 'short-circuit current not known'
			: `short-circuit current ${formatCurrent(point.shortCircuitCurrent_A)}`;
	const demand =
		point.demandCurrent_A === null
			? 'demand current not known'
			: `demand current ${formatCurrent(point.demandCurrent_A)}`;
	return [
		`<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 8 ${width} 110" width="${width}" height="110">`,
		`<circle cx="42" cy="${mid}" r="17" fill="none" stroke="${INK}" stroke-width="1.2"/>`,
		`<path d="M32 ${mid}c3.5 -10 7 -10 10 0s6.5 10 10 0" fill="none" stroke="${INK}" stroke-width="1.2"/>`,
		label(42, 22, utility === '' ? 'Supply network' : utility, { bold: true }),
		label(25, 98, source, { soft: true, anchor: 'start' }),
		line(59, mid, bus, mid),
		inPlant
			? `<circle cx="${bus - 72}" cy="${mid}" r="10" fill="#FFFFFF" stroke="${INK}" stroke-width="1.1"/><circle cx="${bus - 60}" cy="${mid}" r="10" fill="none" stroke="${INK}" stroke-width="1.1"/>`
			: '',
		line(bus, mid - 32, bus, mid + 32, 3),
		label(bus, 22, point.name, { bold: true }),
		label(bus, 112, `${formatVoltage(point.nominalVoltage_V)}, ${point.nominalFrequency_Hz} Hz`, {
			soft: true
		}),
		`<circle cx="${bus + 46}" cy="${mid}" r="7" fill="none" stroke="${COPPER}" stroke-width="1.6"/>`,
		line(bus + 46, mid - 7, bus + 46, mid - 24, 1.2, COPPER),
		line(bus, mid - 24, bus + 46, mid - 24, 1.2, COPPER),
		`<circle cx="${bus}" cy="${mid - 24}" r="2.6" fill="${COPPER}"/>`,
		label(bus + 52, mid - 22, inPlant ? 'measured here, inside the plant' : 'measured here', {
			anchor: 'start',
			colour: COPPER
		}),
		line(bus, mid, load, mid),
		`<path d="M${load} ${mid - 5}l9 5l-9 5z" fill="${INK}"/>`,
		`<rect x="${load + 10}" y="${mid - 17}" width="84" height="34" fill="none" stroke="${INK}" stroke-width="1.1"/>`,
		label(load + 52, mid + 3, 'installation'),
		label(load + 94, 98, demand, { soft: true, anchor: 'end' }),
		'</svg>'
	].join('');
}
