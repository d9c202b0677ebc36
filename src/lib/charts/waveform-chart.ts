import type { EChartsOption } from 'echarts';
import type { Phase } from '../recording/phase';
import type { ChartTable } from './chart-table';
import {
	CHART_PALETTES,
	DEFAULT_CHART_SIZE,
	headroom,
	categoryAxisStyle,
	chartBase,
	legendStyle,
	phaseStyle,
	tooltipStyle,
	valueAxisStyle,
	type ChartMode,
	type ChartSize
} from './theme';

export interface WaveformChannelPoints {
	label: string;
	phase: Phase;
	quantity: 'voltage' | 'current';
	/** V or A, primary or secondary as `valueAxis…` says. */
	unit: string;
	/** Interleaved [seconds, value, …], raw or thinned by decimateMinMax; NaN breaks the line. */
	points: ArrayLike<number>;
}

export interface WaveformData {
	channels: readonly WaveformChannelPoints[];
	/** The whole capture, seconds from its first sample, even when `points` cover a part. */
	extent_s: { from: number; to: number };
	/** The part shown; the whole when absent. */
	view_s?: { from: number; to: number };
	/** e.g. "Voltage, V primary"; used for the panel of that quantity. */
	valueAxis?: { voltage?: string; current?: string };
	/** 10/12-cycle windows to be marked, e.g. the worst one. */
	windows?: readonly { from_s: number; to_s: number; label: string }[];
}

const QUANTITIES = ['voltage', 'current'] as const;

/** Instantaneous values over time: voltages in the upper panel, currents in the lower, zoomed together. */
export function buildWaveformOption(
	data: WaveformData,
	mode: ChartMode,
	size: ChartSize = { ...DEFAULT_CHART_SIZE, height_px: 460 }
): EChartsOption {
	const room = headroom(
		data.channels.map(({ label }) => label),
		// One line over the upper panel; the names of the panels are short.
		'Voltage',
		size.width_px
	);
	const palette = CHART_PALETTES[mode];
	const panels = QUANTITIES.filter((q) => data.channels.some((c) => c.quantity === q));
	const zoomable = mode !== 'print';
	const view = data.view_s ?? data.extent_s;
	return {
		...chartBase(mode),
		legend: { ...legendStyle(mode), itemWidth: 26 },
		tooltip: {
			...tooltipStyle(mode),
			trigger: 'axis',
			axisPointer: { type: 'line', lineStyle: { color: palette.copper } },
			valueFormatter: (value) => (typeof value === 'number' ? value.toPrecision(5) : 'no data')
		},
		axisPointer: { link: [{ xAxisIndex: 'all' }] },
		grid: panelGrids(panels.length, room.top_px + 4, size.height_px - (zoomable ? 84 : 44)),
		xAxis: panels.map((_, i) => ({
			...categoryAxisStyle(mode),
			type: 'value',
			gridIndex: i,
			min: data.extent_s.from,
			max: data.extent_s.to,
			axisLine: { onZero: false, show: true, lineStyle: { color: palette.ink } },
			name: i === panels.length - 1 ? 'Time, s' : undefined,
			nameLocation: 'middle',
			nameGap: 26,
			axisLabel: {
				...categoryAxisStyle(mode).axisLabel,
				show: i === panels.length - 1,
				hideOverlap: true
			}
		})),
		yAxis: panels.map((quantity, i) => ({
			...valueAxisStyle(mode),
			type: 'value',
			gridIndex: i,
			name: axisName(data, quantity),
			axisLabel: {
				...valueAxisStyle(mode).axisLabel,
				formatter: (value: number) => value.toLocaleString('en-GB').replace('-', '−')
			},
			scale: true
		})),
		dataZoom: zoomable
			? [
					{ type: 'inside', xAxisIndex: 'all', startValue: view.from, endValue: view.to, filterMode: 'none' },
					{
						type: 'slider',
						xAxisIndex: 'all',
						startValue: view.from,
						endValue: view.to,
						filterMode: 'none',
						height: 22,
						bottom: 8,
						showDataShadow: false,
						brushSelect: false,
						borderColor: palette.edge,
						fillerColor: `${palette.copper}22`,
						handleStyle: { color: palette.ground, borderColor: palette.copper },
						moveHandleStyle: { color: palette.copper, opacity: 0.5 },
						textStyle: { color: palette.inkSoft, fontSize: 12 },
						labelFormatter: (value: number) => `${value.toFixed(4)} s`
					}
				]
			: undefined,
		series: data.channels.map((channel) => waveformSeries(channel, data, panels, mode))
	};
}

/** Equal panels, one above the other, each with room over it for its axis name. */
function panelGrids(count: number, top_px: number, end_px: number) {
	const gap_px = 40;
	const panel_px = (end_px - top_px - (count - 1) * gap_px) / Math.max(1, count);
	return Array.from({ length: count }, (_, i) => ({
		left: 64,
		right: 16,
		top: top_px + i * (panel_px + gap_px),
		height: panel_px
	}));
}

function axisName(data: WaveformData, quantity: 'voltage' | 'current'): string {
	const given = data.valueAxis?.[quantity];
	if (given) return given;
	const unit = data.channels.find((c) => c.quantity === quantity)?.unit ?? '';
	return `${quantity === 'voltage' ? 'Voltage' : 'Current'}, ${unit}`;
}

function waveformSeries(
	channel: WaveformChannelPoints,
	data: WaveformData,
	panels: readonly ('voltage' | 'current')[],
	mode: ChartMode
) {
	const palette = CHART_PALETTES[mode];
	const style = phaseStyle(channel.phase, mode);
	const panel = panels.indexOf(channel.quantity);
	const isFirst = data.channels.find((c) => c.quantity === channel.quantity) === channel;
	return {
		type: 'line' as const,
		name: channel.label,
		xAxisIndex: panel,
		yAxisIndex: panel,
		dimensions: ['time', 'value'],
		data: pairs(channel.points),
		showSymbol: false,
		symbol: style.symbol,
		connectNulls: false,
		color: style.color,
		lineStyle: { width: 1.25, type: style.dash, color: style.color },
		emphasis: { disabled: true },
		markArea:
			isFirst && data.windows?.length
				? {
						silent: true,
						itemStyle: { color: palette.copper, opacity: 0.1 },
						label: {
							show: panel === 0,
							color: palette.copper,
							backgroundColor: palette.ground,
							padding: [1, 4],
							fontSize: 12,
							position: 'insideTop' as const
						},
						data: data.windows.map((w): [{ name: string; xAxis: number }, { xAxis: number }] => [
							{ name: w.label, xAxis: w.from_s },
							{ xAxis: w.to_s }
						])
					}
				: undefined
	};
}

function pairs(points: ArrayLike<number>): [number, number][] {
	const list: [number, number][] = [];
	for (let i = 0; i + 1 < points.length; i += 2) list.push([points[i] as number, points[i + 1] as number]);
	return list;
}

/** The points as drawn, channel after channel. */
export function waveformTable(data: WaveformData): ChartTable {
	return {
		columns: [
			{ label: 'Channel' },
			{ label: 'Time, s', numeric: true, digits: 6 },
			{ label: 'Value', numeric: true, digits: 4 },
			{ label: 'Unit' }
		],
		rows: data.channels.flatMap((channel) =>
			pairs(channel.points).map(([time, value]) => [
				channel.label,
				time,
				Number.isNaN(value) ? null : value,
				channel.unit
			])
		)
	};
}
