import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

// Contrast and relative luminance as WCAG 2.2 defines them (w3.org/TR/WCAG22, "contrast ratio", "relative luminance").
// Success criteria 1.4.3 (4.5:1 text, 3:1 large text) and 1.4.11 (3:1 for controls and graphics).

const css = readFileSync(new URL('../../src/app.css', import.meta.url), 'utf8');

type Tokens = Map<string, string>;

function readTokens(theme: 'light' | 'dark'): Tokens {
	const tokens: Tokens = new Map();
	for (const [, name = '', light = '', dark = ''] of css.matchAll(
		/--([a-z0-9-]+): light-dark\((#[0-9a-f]{6}), (#[0-9a-f]{6})\);/g
	)) {
		tokens.set(name, theme === 'light' ? light : dark);
	}
	return tokens;
}

function relativeLuminance(hex: string): number {
	const [r = 0, g = 0, b = 0] = [1, 3, 5].map((at) => {
		const channel = parseInt(hex.slice(at, at + 2), 16) / 255;
		return channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4;
	});
	return 0.2126 * r + 0.7152 * g + 0.0722 * b;
}

function contrast(tokens: Tokens, foreground: string, ground: string): number {
	const [a, b] = [foreground, ground].map((name) => {
		const hex = tokens.get(name);
		if (hex === undefined) throw new Error(`app.css has no token --${name}`);
		return relativeLuminance(hex);
	}) as [number, number];
	return (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05);
}

const TEXT_PAIRS: [string, string][] = [
	...['ink', 'ink-soft', 'copper', 'copper-deep', 'verdigris', 'ochre', 'oxide', 'slate'].flatMap(
		(text): [string, string][] => [
			[text, 'paper'],
			[text, 'sheet']
		]
	),
	...['ink', 'ink-soft', 'copper', 'copper-deep'].map((text): [string, string] => [text, 'copper-tint']),
	...['verdigris', 'ochre', 'oxide', 'slate'].flatMap((tone): [string, string][] => [
		[tone, `${tone}-tint`],
		['ink', `${tone}-tint`],
		['ink-soft', `${tone}-tint`]
	]),
	['ink', 'oxide-wash'],
	['ink-soft', 'oxide-wash'],
	['oxide', 'oxide-wash'],
	['copper-deep', 'oxide-wash'],
	['copper-deep', 'oxide-tint'],
	['copper-deep', 'ochre-tint'],
	['copper-deep', 'slate-tint'],
	['on-copper', 'copper'],
	['on-copper', 'copper-deep'],
	['on-oxide', 'oxide']
];

const GRAPHIC_PAIRS: [string, string][] = [
	'edge',
	'ink-faint',
	'copper',
	'phase-1',
	'phase-2',
	'phase-3',
	'phase-n'
].flatMap((part): [string, string][] => [
	[part, 'paper'],
	[part, 'sheet']
]);

describe('relative luminance', () => {
	it('gives 21:1 for black on white, the greatest ratio there is (WCAG 2.2)', () => {
		const tokens = new Map([
			['black', '#000000'],
			['white', '#ffffff']
		]);
		expect(contrast(tokens, 'black', 'white')).toBeCloseTo(21, 10);
	});
});

describe.each(['light', 'dark'] as const)('%s theme', (theme) => {
	const tokens = readTokens(theme);

	it.each(TEXT_PAIRS)('text %s on %s reads (4.5:1)', (text, ground) => {
		expect(contrast(tokens, text, ground)).toBeGreaterThanOrEqual(4.5);
	});

	it.each(GRAPHIC_PAIRS)('line %s on %s shows (3:1)', (part, ground) => {
		expect(contrast(tokens, part, ground)).toBeGreaterThanOrEqual(3);
	});
});
