import type { EChartsOption } from 'echarts';
import type { ChartTable } from './chart-table';
import { escapeHtml } from './escape-html';
import {
	axisTextStyle,
	categoryAxisStyle,
	CHART_PALETTES,
	chartBase,
	DEFAULT_CHART_SIZE,
	legendStyle,
	tooltipStyle,
	type ChartMode,
	type ChartSize
} from './theme';

export interface HeatmapData {
	orders: readonly number[];
	/** [columns] start of each, ms since 1970 UTC; `end_ms` is the end of the last. */
	starts_ms: readonly number[];
	end_ms: number;
	/** [orders][columns] percent; null = no figure. */
	cells: readonly (readonly (number | null)[])[];
	/** [columns] true where every interval is flagged. */
	masked: readonly boolean[];
	/** After "percent": "of the fundamental", "of the limit". */
	of: string;
	/** Whether 100 is a limit: what lies above stands out then. */
	isOfLimit: boolean;
	zone: string;
}

/** Steps from light to dark (dark ground: from dark to light), even in lightness, so that they can be told in grey. */
const STEPS: Record<ChartMode, readonly string[]> = {
	'screen-light': ['#f3ece0', '#e6cba9', '#d29f6d', '#b26b38', '#7a3516'],
	'screen-dark': ['#242b33', '#4b3526', '#855432', '#c07a4b', '#f0b88f'],
	print: ['#f3ece0', '#e6cba9', '#d29f6d', '#b26b38', '#7a3516']
};
const OVER: Record<ChartMode, string> = {
	'screen-light': '#1d0505',
	'screen-dark': '#fff4ee',
	print: '#1d0505'
};

interface Piece {
	from: number;
	/** Infinity for the last one. */
	to: number;
	label: string;
}

function roundUp(value: number): number {
	if (!(value > 0)) return 1;
	const power = 10 ** Math.floor(Math.log10(value));
	return [1, 2, 2.5, 5, 10].map((m) => m * power).find((candidate) => candidate >= value * (1 - 1e-9))!;
}

/** Five equal steps up to the limit and one above it; or up to a round figure over the greatest value. */
export function heatPieces(data: Pick<HeatmapData, 'cells' | 'isOfLimit'>): Piece[] {
	let greatest = 0;
	for (const row of data.cells)
		for (const value of row) if (value !== null && value > greatest) greatest = value;
	const each = data.isOfLimit ? 20 : roundUp(greatest / 5);
	const text = (value: number) => String(Number(value.toPrecision(3)));
	const pieces = Array.from({ length: 5 }, (_, i) => ({
		from: i * each,
		to: (i + 1) * each,
		label: `${text(i * each)} to ${text((i + 1) * each)} %`
	}));
	return data.isOfLimit ? [...pieces, { from: 100, to: Infinity, label: 'over the limit' }] : pieces;
}

export function buildHeatmapOption(
	data: HeatmapData,
	mode: ChartMode,
	size: ChartSize = DEFAULT_CHART_SIZE
): EChartsOption {
	const palette = CHART_PALETTES[mode];
	const { short, full } = timeTexts(data);
	const pieces = heatPieces(data);
	const points: [number, number, number][] = [];
	data.cells.forEach((row, i) =>
		row.forEach((value, column) => value !== null && points.push([column, i + 1, value]))
	);
	const marked = data.masked.flatMap((isMasked, column): [number, number, number][] =>
		isMasked ? [[column, 0, 0]] : []
	);
	const isNarrow = size.width_px < 560;
	return {
		...chartBase(mode),
		grid: { left: 64, right: 12, top: isNarrow ? 96 : 62, bottom: 46 },
		tooltip: {
			...tooltipStyle(mode),
			trigger: 'item',
			formatter: (given) => {
				const value: unknown = Array.isArray(given) ? null : given.value;
				if (!Array.isArray(value)) return '';
				const [column, row, level] = value as number[];
				const when = escapeHtml(full(data.starts_ms[column!]!));
				if (row === 0) return `${when}<br>flagged`;
				return `${when}<br>order ${data.orders[row! - 1]}: ${level!.toPrecision(4)} % ${escapeHtml(data.of)}`;
			}
		},
		xAxis: {
			...categoryAxisStyle(mode),
			type: 'category',
			name: `Time, ${data.zone}`,
			nameLocation: 'middle',
			nameGap: 28,
			data: data.starts_ms.map(short),
			axisLabel: { ...axisTextStyle(mode), hideOverlap: true },
			axisTick: { show: false }
		},
		yAxis: {
			...categoryAxisStyle(mode),
			type: 'category',
			name: 'Order',
			nameLocation: 'end',
			nameTextStyle: { ...axisTextStyle(mode), align: 'right' },
			data: ['flagged', ...data.orders.map(String)],
			axisLabel: {
				...axisTextStyle(mode),
				// Every order would be too many labels: odd ones up to 13, then the fives.
				interval: (index: number) => {
					const order = data.orders[index - 1];
					if (order === undefined) return data.masked.includes(true);
					return order < 15 ? [3, 5, 7, 9, 11, 13].includes(order) : order % 5 === 0;
				}
			},
			axisTick: { show: false }
		},
		visualMap: [
			{
				type: 'piecewise',
				seriesIndex: 0,
				orient: 'horizontal',
				left: 0,
				top: 0,
				itemWidth: 16,
				itemHeight: 12,
				itemGap: 10,
				textGap: 5,
				textStyle: legendStyle(mode).textStyle,
				selectedMode: mode === 'print' ? false : 'multiple',
				pieces: pieces.map(({ from, to, label }, i) => ({
					gte: from,
					...(Number.isFinite(to) ? { lt: to } : {}),
					label,
					color: i < 5 ? STEPS[mode][i]! : OVER[mode]
				})),
				outOfRange: { color: palette.ground }
			},
			{ show: false, type: 'piecewise', seriesIndex: 1, pieces: [{ value: 0, color: palette.slate }] }
		],
		series: [
			{
				type: 'heatmap',
				name: 'levels',
				data: points,
				progressive: 0,
				emphasis: { itemStyle: { borderColor: palette.ink, borderWidth: 1 } }
			},
			{
				type: 'heatmap',
				name: 'flagged',
				data: marked,
				progressive: 0,
				emphasis: { disabled: true }
			}
		]
	};
}

const DAY_MS = 86_400_000;

function timeTexts({ zone, starts_ms, end_ms }: Pick<HeatmapData, 'zone' | 'starts_ms' | 'end_ms'>) {
	const length_ms = end_ms - (starts_ms[0] ?? end_ms);
	const format = (options: Intl.DateTimeFormatOptions) =>
		new Intl.DateTimeFormat('en-GB', { timeZone: zone, hourCycle: 'h23', ...options });
	const clock = { hour: '2-digit', minute: '2-digit' } as const;
	const fine = length_ms < 900_000 ? { ...clock, second: '2-digit' as const } : clock;
	const short = format(length_ms > 2 * DAY_MS ? { day: 'numeric', month: 'short', ...clock } : fine);
	const full = format({ day: 'numeric', month: 'short', ...fine });
	return { short: (ms: number) => short.format(ms), full: (ms: number) => full.format(ms) };
}

export function heatmapTable(data: HeatmapData): ChartTable {
	const { full } = timeTexts(data);
	return {
		columns: [
			{ label: `Start, ${data.zone}` },
			...data.orders.map((order) => ({ label: String(order), numeric: true, digits: 2 })),
			{ label: 'Flagged' }
		],
		rows: data.starts_ms.map((start, column) => [
			full(start),
			...data.cells.map((row) => row[column] ?? null),
			data.masked[column] ? 'yes' : 'no'
		])
	};
}
