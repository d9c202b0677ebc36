import type { EChartsOption } from 'echarts';
import type { Phase } from '../recording/phase';
import type { ChartTable } from './chart-table';
import { escapeHtml } from './escape-html';
import {
	CHART_PALETTES,
	DEFAULT_CHART_SIZE,
	categoryAxisStyle,
	chartBase,
	headroom,
	legendStyle,
	phaseStyle,
	tooltipStyle,
	valueAxisStyle,
	type ChartMode,
	type ChartSize
} from './theme';

/** Who a set of bars belongs to: a conductor, or one of three plain kinds told apart by colour and hatching. */
export type BarLook = { phase: Phase } | { tone: 'first' | 'second' | 'third' };

export interface OrderBarsData {
	/** Orders along the axis, ascending. */
	orders: readonly number[];
	/** One set of bars each, values with sign; `hollow` bars are drawn by their outline. Both aligned with `orders`. */
	sets: readonly {
		label: string;
		look: BarLook;
		values: readonly (number | null)[];
		hollow?: readonly boolean[];
	}[];
	/** Quantity and unit. */
	valueAxis: string;
	/** What hollow bars mean; names them in the legend. */
	hollowMeans?: string;
	/** Digits of the data table. */
	digits?: number;
}

/** Signed bars per order, sets side by side, zero as a line of its own. */
export function buildOrderBarsOption(
	data: OrderBarsData,
	mode: ChartMode,
	size: ChartSize = DEFAULT_CHART_SIZE
): EChartsOption {
	const palette = CHART_PALETTES[mode];
	const names = data.sets.map(({ label }) => ({ name: label, icon: 'rect' }));
	const legend = data.hollowMeans
		? [...names, { name: data.hollowMeans, icon: 'path://M0 0h14v10h-14z M1.5 1.5v7h11v-7z' }]
		: names;
	const room = headroom(
		legend.map(({ name }) => name),
		data.valueAxis,
		size.width_px
	);
	return {
		...chartBase(mode),
		legend: { ...legendStyle(mode), data: legend },
		grid: {
			left: 8,
			right: 12,
			top: room.top_px,
			bottom: 24,
			outerBoundsMode: 'same',
			outerBoundsContain: 'axisLabel'
		},
		tooltip: {
			...tooltipStyle(mode),
			trigger: 'axis',
			axisPointer: { type: 'shadow', shadowStyle: { color: palette.copper, opacity: 0.1 } },
			formatter: (parameters) => tooltipText(data, parameters)
		},
		xAxis: {
			...categoryAxisStyle(mode),
			type: 'category',
			data: data.orders.map((order) => (order === 0 ? 'dc' : String(order))),
			name: 'Harmonic order',
			nameLocation: 'middle',
			nameGap: 26,
			axisTick: { show: false },
			// Labels stay at the foot of the plot, while zero is where the bars stand: its line is drawn with them.
			axisLine: { show: false, onZero: false },
			axisLabel: { ...categoryAxisStyle(mode).axisLabel, hideOverlap: true }
		},
		yAxis: {
			...valueAxisStyle(mode),
			type: 'value',
			name: room.axisName,
			axisLabel: {
				...valueAxisStyle(mode).axisLabel,
				formatter: (value: number) => plainNumber(value)
			}
		},
		series: [
			...data.sets.map((set, i) => ({
				...bars(set, mode),
				...(i === 0 ? { markLine: zeroLine(mode) } : {})
			})),
			...(data.hollowMeans
				? [
						{
							type: 'bar' as const,
							name: data.hollowMeans,
							data: [],
							itemStyle: { color: palette.inkSoft }
						}
					]
				: [])
		]
	};
}

function plainNumber(value: number): string {
	return value.toLocaleString('en-GB', { maximumSignificantDigits: 4 }).replace('-', '−');
}

function zeroLine(mode: ChartMode) {
	return {
		silent: true,
		symbol: 'none',
		label: { show: false },
		lineStyle: { color: CHART_PALETTES[mode].ink, width: 1, type: 'solid' as const },
		data: [{ yAxis: 0 }]
	};
}

function lookStyle(look: BarLook, mode: ChartMode) {
	const palette = CHART_PALETTES[mode];
	if ('phase' in look) return { color: phaseStyle(look.phase, mode).color };
	if (look.tone === 'first') return { color: palette.copper };
	if (look.tone === 'second') return { color: palette.slate };
	return {
		color: palette.ground,
		borderColor: palette.ink,
		borderWidth: 1,
		decal: {
			symbol: 'rect' as const,
			symbolSize: 1,
			color: palette.ink,
			dashArrayX: [1, 0] as [number, number],
			dashArrayY: [1.6, 2.4] as [number, number],
			rotation: -Math.PI / 4
		}
	};
}

function bars(set: OrderBarsData['sets'][number], mode: ChartMode) {
	const style = lookStyle(set.look, mode);
	const outline = {
		color: CHART_PALETTES[mode].ground,
		borderColor: style.color,
		borderWidth: 1.25
	};
	return {
		type: 'bar' as const,
		name: set.label,
		barMaxWidth: 10,
		barCategoryGap: '28%',
		barGap: '0%',
		emphasis: { disabled: true },
		itemStyle: style,
		data: set.values.map((value, i) =>
			value === null ? '-' : set.hollow?.[i] ? { value, itemStyle: outline } : value
		)
	};
}

function tooltipText(data: OrderBarsData, parameters: unknown): string {
	const first: unknown = Array.isArray(parameters) ? parameters[0] : parameters;
	const index =
		typeof first === 'object' && first !== null && 'dataIndex' in first ? Number(first.dataIndex) : 0;
	const order = data.orders[index];
	const lines = data.sets.map(({ label, values, hollow }) => {
		const value = values[index];
		const remark = hollow?.[index] && data.hollowMeans ? ` (${data.hollowMeans})` : '';
		return `${escapeHtml(label)}: ${value === null || value === undefined ? 'no data' : plainNumber(value)}${escapeHtml(remark)}`;
	});
	return [`<b>${order === 0 ? 'dc' : `order ${order ?? ''}`}</b>`, ...lines].join('<br>');
}

export function orderBarsTable(data: OrderBarsData): ChartTable {
	return {
		columns: [
			{ label: 'Order', numeric: true, digits: 0 },
			...data.sets.map(({ label }) => ({ label, numeric: true, digits: data.digits ?? 3 }))
		],
		rows: data.orders.map((order, i) => [order, ...data.sets.map(({ values }) => values[i] ?? null)])
	};
}
