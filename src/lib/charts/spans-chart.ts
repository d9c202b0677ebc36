import type { CustomSeriesOption, EChartsOption } from 'echarts';
import type { ChartTable } from './chart-table';
import { escapeHtml } from './escape-html';
import {
	CHART_PALETTES,
	axisTextStyle,
	categoryAxisStyle,
	chartBase,
	legendStyle,
	tooltipStyle,
	type ChartMode,
	type ChartPalette,
	type ChartSize
} from './theme';

export interface SpansData {
	/** IANA zone in which instants are written. */
	timeZone: string;
	/** Stretches of time, ms since 1970 UTC, each in a row; rows stand in the order of their first span. */
	spans: readonly {
		row: string;
		from_ms: number;
		to_ms: number;
		label: string;
		tone: 'plain' | 'good' | 'attention' | 'bad';
	}[];
	/** Single instants, drawn across all rows. */
	marks: readonly { at_ms: number; label: string }[];
}

const TONE: Record<SpansData['spans'][number]['tone'], keyof ChartPalette> = {
	plain: 'slate',
	good: 'verdigris',
	attention: 'ochre',
	bad: 'oxide'
};
/** What a colour says where its spans have no label in common. */
const TONE_WORDS: Record<SpansData['spans'][number]['tone'], string> = {
	plain: 'one capture each',
	good: 'counts',
	attention: 'to be looked at',
	bad: 'at fault'
};
/** A span is drawn at least this wide, so that a second in a week is still seen. */
const LEAST_PX = 3;

export function spanRows(data: SpansData): string[] {
	return [...new Set(data.spans.map(({ row }) => row))];
}

/** Tones that occur, in the order of the legend, each with the label that all its spans share. */
function legendOf({ spans }: SpansData) {
	return (['plain', 'good', 'attention', 'bad'] as const).flatMap((tone) => {
		const labels = new Set(spans.filter((span) => span.tone === tone).map(({ label }) => label));
		if (labels.size === 0) return [];
		return [{ tone, word: labels.size === 1 ? [...labels][0]! : TONE_WORDS[tone] }];
	});
}

/** Height that gives every row its line. */
export function spansHeight_px(data: SpansData): number {
	return 126 + 34 * Math.max(1, spanRows(data).length);
}

export function buildSpansOption(data: SpansData, mode: ChartMode, size: ChartSize): EChartsOption {
	const palette = CHART_PALETTES[mode];
	const rows = spanRows(data);
	const instants = [
		...data.spans.flatMap(({ from_ms, to_ms }) => [from_ms, to_ms]),
		...data.marks.map(({ at_ms }) => at_ms)
	];
	const [first, last] = [Math.min(...instants), Math.max(...instants)];
	const margin = Math.max(1000, (last - first) * 0.04);
	const text = instantText(data.timeZone, last - first);
	const legend = legendOf(data);
	const labelWidth = size.width_px < 480 ? 84 : 150;
	return {
		...chartBase(mode),
		legend: {
			...legendStyle(mode),
			selectedMode: false,
			data: legend.map(({ word }) => ({ name: word, icon: 'rect' }))
		},
		grid: { left: labelWidth + 12, right: 16, top: 60, bottom: 42 },
		tooltip: {
			...tooltipStyle(mode),
			trigger: 'item',
			formatter: (parameters) => {
				const at = Array.isArray(parameters) ? parameters[0] : parameters;
				const span = data.spans[at?.dataIndex ?? -1];
				return span
					? `${escapeHtml(span.label)}<br>${text(span.from_ms)} to ${text(span.to_ms)}`
					: escapeHtml(String(at?.name ?? ''));
			}
		},
		xAxis: {
			...categoryAxisStyle(mode),
			type: 'value',
			min: first - margin,
			max: last + margin,
			splitNumber: size.width_px < 480 ? 2 : 4,
			splitLine: { show: true, lineStyle: { color: palette.rule } },
			axisLabel: {
				...axisTextStyle(mode),
				hideOverlap: true,
				showMinLabel: false,
				showMaxLabel: false,
				formatter: (value: number) => text(value)
			}
		},
		yAxis: {
			...categoryAxisStyle(mode),
			type: 'category',
			inverse: true,
			data: rows,
			axisTick: { show: false },
			axisLabel: { ...axisTextStyle(mode), width: labelWidth, overflow: 'truncate', interval: 0 }
		},
		series: [
			{
				type: 'custom',
				renderItem: drawSpan(data, rows, palette),
				encode: { x: [0, 1], y: 2 },
				data: data.spans.map(({ from_ms, to_ms, row }) => [from_ms, to_ms, rows.indexOf(row)]),
				markLine: {
					silent: true,
					symbol: 'none',
					lineStyle: { color: palette.copper, width: 1.5, type: 'solid' },
					label: {
						...axisTextStyle(mode),
						color: palette.copper,
						position: 'end',
						formatter: ({ name }: { name: string }) => name
					},
					data: data.marks.map(({ at_ms, label }) => ({ xAxis: at_ms, name: label }))
				}
			},
			// Spans carry their own colours; these are there for the legend alone.
			...legend.map(({ tone, word }) => ({
				type: 'bar' as const,
				name: word,
				color: palette[TONE[tone]],
				data: []
			}))
		]
	};
}

function drawSpan(
	data: SpansData,
	rows: readonly string[],
	palette: ChartPalette
): CustomSeriesOption['renderItem'] {
	return (parameters, api) => {
		const span = data.spans[parameters.dataIndex]!;
		const row = rows.indexOf(span.row);
		const [from, to] = [api.coord([span.from_ms, row]), api.coord([span.to_ms, row])];
		const height = 18;
		return {
			type: 'rect',
			shape: {
				x: from[0]!,
				y: from[1]! - height / 2,
				width: Math.max(LEAST_PX, to[0]! - from[0]!),
				height
			},
			style: { fill: palette[TONE[span.tone]] }
		};
	};
}

/** Days where weeks are shown, times where hours are. */
function instantText(timeZone: string, width_ms: number): (at_ms: number) => string {
	const wide = width_ms > 3 * 86_400_000;
	const format = new Intl.DateTimeFormat('en-GB', {
		timeZone,
		day: 'numeric',
		month: 'short',
		...(wide ? { year: 'numeric' } : { hour: '2-digit', minute: '2-digit' }),
		...(width_ms < 600_000 ? { second: '2-digit' } : {})
	});
	return (at_ms) => format.format(at_ms);
}

export function spansTable(data: SpansData): ChartTable {
	const text = instantText(data.timeZone, 0);
	return {
		columns: [{ label: 'Row' }, { label: 'What' }, { label: 'From' }, { label: 'To' }],
		rows: [
			...data.spans.map(({ row, label, from_ms, to_ms }) => [row, label, text(from_ms), text(to_ms)]),
			...data.marks.map(({ label, at_ms }) => ['instant', label, text(at_ms), text(at_ms)])
		]
	};
}
