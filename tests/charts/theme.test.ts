import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { LINE_PHASES } from '$lib/recording/phase';
import { CHART_MODES, CHART_PALETTES, headroom, phaseStyle, type ChartPalette } from '$lib/charts/theme';

const css = readFileSync(new URL('../../src/app.css', import.meta.url), 'utf8');

const TOKEN_OF: Record<keyof ChartPalette, string> = {
	ground: 'sheet',
	rule: 'rule',
	edge: 'edge',
	ink: 'ink',
	inkSoft: 'ink-soft',
	copper: 'copper',
	verdigris: 'verdigris',
	ochre: 'ochre',
	oxide: 'oxide',
	slate: 'slate',
	phase1: 'phase-1',
	phase2: 'phase-2',
	phase3: 'phase-3',
	phaseN: 'phase-n'
};

function token(name: string): { light: string; dark: string } {
	const match = new RegExp(`--${name}: light-dark\\((#[0-9a-f]{6}), (#[0-9a-f]{6})\\);`).exec(css);
	if (!match?.[1] || !match[2]) throw new Error(`app.css has no token --${name}`);
	return { light: match[1], dark: match[2] };
}

/** Relative luminance of WCAG 2.2: what a grey printer sees. */
function luminance(hex: string): number {
	const [r = 0, g = 0, b = 0] = [1, 3, 5].map((at) => {
		const channel = parseInt(hex.slice(at, at + 2), 16) / 255;
		return channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4;
	});
	return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}

describe('the charts draw with the palette of the pages', () => {
	it.each(Object.entries(TOKEN_OF) as [keyof ChartPalette, string][])('%s is --%s', (key, name) => {
		expect(CHART_PALETTES['screen-light'][key]).toBe(token(name).light);
		expect(CHART_PALETTES['screen-dark'][key]).toBe(token(name).dark);
	});
});

describe('phases can be told apart', () => {
	it.each(CHART_MODES)('without colour, by dash and by marker (%s)', (mode) => {
		const styles = [...LINE_PHASES, 'N' as const].map((phase) => phaseStyle(phase, mode));
		expect(new Set(styles.map((style) => String(style.dash))).size).toBe(4);
		expect(new Set(styles.map((style) => style.symbol)).size).toBe(4);
	});

	it('in grey print, by lightness: neighbouring bars differ by 1.9:1 or more', () => {
		const [a = 0, b = 0, c = 0] = LINE_PHASES.map(
			(phase) => luminance(phaseStyle(phase, 'print').color) + 0.05
		);
		expect(b / a).toBeGreaterThan(1.9);
		expect(b / c).toBeGreaterThan(1.9);
		expect(a / c).toBeGreaterThan(1.5);
	});
});

describe('headroom', () => {
	it('wraps a long axis name and makes room for it', () => {
		const name = 'percent of demand current, weekly 95th percentile of 10-minute values';
		const wide = headroom(['A', 'B', 'C'], name, 900);
		const narrow = headroom(['A', 'B', 'C'], name, 320);
		expect(wide.axisName).toBe(name);
		expect(narrow.axisName.split('\n').length).toBeGreaterThan(1);
		expect(narrow.axisName.replaceAll('\n', ' ')).toBe(name);
		expect(narrow.top_px).toBeGreaterThan(wide.top_px);
	});
});
