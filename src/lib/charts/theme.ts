import type { EChartsOption } from 'echarts';
import type { Phase } from '../recording/phase';

/** Where a chart is drawn. `print` is for paper, the PDF and exported pictures: white ground, told apart in grey. */
export const CHART_MODES = ['screen-light', 'screen-dark', 'print'] as const;
export type ChartMode = (typeof CHART_MODES)[number];

/**
 * The palette as plain figures, since neither a canvas nor the PDF knows CSS variables. The two screen columns are
 * those of src/app.css (held together by tests/charts/theme.test.ts).
 */
export interface ChartPalette {
	ground: string;
	rule: string;
	edge: string;
	ink: string;
	inkSoft: string;
	copper: string;
	verdigris: string;
	ochre: string;
	oxide: string;
	slate: string;
	/** Lines and marks of the phases. */
	phase1: string;
	phase2: string;
	phase3: string;
	phaseN: string;
}

export const CHART_PALETTES: Record<ChartMode, ChartPalette> = {
	'screen-light': {
		ground: '#ffffff',
		rule: '#dcd5c7',
		edge: '#857d6f',
		ink: '#17202b',
		inkSoft: '#4b5766',
		copper: '#a24a21',
		verdigris: '#1e7263',
		ochre: '#7f5600',
		oxide: '#a5231c',
		slate: '#566474',
		phase1: '#1f5a8a',
		phase2: '#8a4b93',
		phase3: '#4e5b2e',
		phaseN: '#7d7466'
	},
	'screen-dark': {
		ground: '#1a2027',
		rule: '#343d47',
		edge: '#7b8592',
		ink: '#eee9df',
		inkSoft: '#b4bbc4',
		copper: '#e39468',
		verdigris: '#74c4b2',
		ochre: '#e3b555',
		oxide: '#f2958b',
		slate: '#a9b5c2',
		phase1: '#74ace0',
		phase2: '#cb95d4',
		phase3: '#afc07f',
		phaseN: '#b8ae9b'
	},
	print: {
		ground: '#ffffff',
		rule: '#dcd5c7',
		edge: '#857d6f',
		ink: '#17202b',
		inkSoft: '#4b5766',
		copper: '#a24a21',
		verdigris: '#1e7263',
		ochre: '#7f5600',
		oxide: '#a5231c',
		slate: '#566474',
		// Spread in lightness, so that side-by-side bars differ on a grey printer too.
		phase1: '#1f5a8a',
		phase2: '#ad7ab5',
		phase3: '#2f3818',
		phaseN: '#7d7466'
	}
};

/** The PDF registers its font under exactly this name and knows no list of substitutes. */
export const CHART_FONT = 'IBM Plex Sans';

export function chartFont(mode: ChartMode): string {
	return mode === 'print' ? CHART_FONT : `${CHART_FONT}, ui-sans-serif, sans-serif`;
}
export const CHART_TEXT_PX = 12;

export interface ChartSize {
	width_px: number;
	height_px: number;
}

export const DEFAULT_CHART_SIZE: ChartSize = { width_px: 720, height_px: 340 };

/** Mean advance of a character at CHART_TEXT_PX, rounded up: widths are estimated, since paper cannot measure. */
const CHARACTER_PX = 6.6;
const LINE_PX = 18;

/** Room over the plot for the legend and the name of the value axis, both of which wrap on a narrow screen. */
export function headroom(legend: readonly string[], axisName: string, width_px: number) {
	const LEGEND_MARK_PX = 50;
	let rows = legend.length > 0 ? 1 : 0;
	let used = 0;
	for (const name of legend) {
		const entry = LEGEND_MARK_PX + name.length * CHARACTER_PX;
		if (used > 0 && used + entry > width_px) {
			rows++;
			used = 0;
		}
		used += entry;
	}
	const nameLines = breakLines(axisName, Math.max(120, width_px - 60) / CHARACTER_PX);
	return {
		top_px: rows * (LINE_PX + 6) + nameLines.length * LINE_PX + 16,
		axisName: nameLines.join('\n')
	};
}

function breakLines(text: string, mostCharacters: number): string[] {
	const lines = [''];
	for (const word of text.split(' ')) {
		const last = lines.at(-1) ?? '';
		if (last && last.length + 1 + word.length > mostCharacters) lines.push(word);
		else lines[lines.length - 1] = last ? `${last} ${word}` : word;
	}
	return lines;
}

/** How one conductor is drawn: colour, and for those who cannot tell colours a dash and a marker of its own. */
export interface PhaseStyle {
	color: string;
	dash: 'solid' | number[];
	symbol: 'circle' | 'rect' | 'triangle' | 'diamond';
}

export function phaseStyle(phase: Phase, mode: ChartMode): PhaseStyle {
	const palette = CHART_PALETTES[mode];
	switch (phase) {
		case 'L1':
		case 'L1L2':
			return { color: palette.phase1, dash: 'solid', symbol: 'circle' };
		case 'L2':
		case 'L2L3':
			return { color: palette.phase2, dash: [7, 3], symbol: 'rect' };
		case 'L3':
		case 'L3L1':
			return { color: palette.phase3, dash: [2, 2], symbol: 'triangle' };
		case 'N':
			return { color: palette.phaseN, dash: [8, 3, 2, 3], symbol: 'diamond' };
	}
}

/** What every chart has in common. Builders spread this and add axes and series. */
export function chartBase(mode: ChartMode): EChartsOption {
	const palette = CHART_PALETTES[mode];
	return {
		animation: false,
		backgroundColor: mode === 'print' ? palette.ground : 'transparent',
		textStyle: { fontFamily: chartFont(mode), fontSize: CHART_TEXT_PX, color: palette.ink },
		aria: { enabled: false }
	};
}

export function legendStyle(mode: ChartMode) {
	const palette = CHART_PALETTES[mode];
	return {
		top: 0,
		left: 0,
		itemWidth: 14,
		itemHeight: 10,
		itemGap: 18,
		inactiveColor: palette.edge,
		inactiveBorderColor: palette.edge,
		textStyle: { fontFamily: chartFont(mode), fontSize: CHART_TEXT_PX, color: palette.inkSoft }
	};
}

export function axisTextStyle(mode: ChartMode) {
	const palette = CHART_PALETTES[mode];
	return { fontFamily: chartFont(mode), fontSize: CHART_TEXT_PX, color: palette.inkSoft };
}

/** Axis lines and graticule. The value axis has no line of its own: the graticule carries it. */
export function categoryAxisStyle(mode: ChartMode) {
	const palette = CHART_PALETTES[mode];
	return {
		axisLine: { show: true, lineStyle: { color: palette.ink, width: 1 } },
		axisTick: { show: true, length: 4, lineStyle: { color: palette.edge } },
		axisLabel: axisTextStyle(mode),
		nameTextStyle: axisTextStyle(mode),
		splitLine: { show: false }
	};
}

export function valueAxisStyle(mode: ChartMode) {
	const palette = CHART_PALETTES[mode];
	return {
		axisLine: { show: false },
		axisTick: { show: false },
		axisLabel: axisTextStyle(mode),
		// The name stands over the axis, flush with the plot's left edge, where it is read first.
		nameLocation: 'end' as const,
		nameTextStyle: {
			...axisTextStyle(mode),
			align: 'left' as const,
			verticalAlign: 'bottom' as const,
			lineHeight: 16
		},
		splitLine: { show: true, lineStyle: { color: palette.rule, width: 1 } }
	};
}

/** Tooltips belong to the screen; on paper they would only widen the picture's bounds. */
export function tooltipStyle(mode: ChartMode) {
	const palette = CHART_PALETTES[mode];
	return {
		show: mode !== 'print',
		confine: true,
		backgroundColor: palette.ground,
		borderColor: palette.ink,
		borderWidth: 1,
		borderRadius: 0,
		padding: [6, 10],
		shadowBlur: 0,
		shadowColor: 'transparent',
		textStyle: { fontFamily: chartFont(mode), fontSize: 13, color: palette.ink }
	};
}
