import type { EChartsOption } from 'echarts';
import type { Phase } from '../recording/phase';
import type { ChartTable } from './chart-table';
import {
	CHART_PALETTES,
	categoryAxisStyle,
	chartBase,
	legendStyle,
	phaseStyle,
	tooltipStyle,
	valueAxisStyle,
	type ChartMode
} from './theme';

export interface TrendData {
	series: readonly {
		label: string;
		phase: Phase;
		/** Start of each interval, milliseconds since 1970 UTC; ascending. */
		times_ms: ArrayLike<number>;
		/** null or NaN = no data. */
		values: ArrayLike<number | null>;
	}[];
	/** Quantity and unit, e.g. "Current TDD, % of demand current". */
	valueAxis: string;
	/** e.g. {label: '95th percentile, C', value: 9.63}. */
	percentile?: { label: string; value: number } | null;
	limit?: { label: string; value: number } | null;
	/** Intervals with a dip, swell or interruption: shaded, and their values left out. */
	flagged: readonly { from_ms: number; to_ms: number }[];
	/** IANA zone in which the axis counts: the site's. */
	zone: string;
}

/** Values over time with the percentile and the limit drawn; flagged intervals masked. */
export function buildTrendOption(data: TrendData, mode: ChartMode): EChartsOption {
	const palette = CHART_PALETTES[mode];
	const time = timeFormat(data.zone);
	const rules = [
		...(data.limit ? [rule(data.limit, palette.ink, 'solid' as const)] : []),
		...(data.percentile ? [rule(data.percentile, palette.copper, [6, 3])] : [])
	];
	return {
		...chartBase(mode),
		useUTC: true,
		legend: { ...legendStyle(mode), itemWidth: 26 },
		grid: {
			left: 8,
			right: 16,
			top: 58,
			bottom: mode === 'print' ? 24 : 56,
			outerBoundsMode: 'same',
			outerBoundsContain: 'axisLabel'
		},
		tooltip: {
			...tooltipStyle(mode),
			trigger: 'axis',
			axisPointer: {
				type: 'line',
				lineStyle: { color: palette.copper },
				label: { formatter: ({ value }) => time.full(Number(value)) }
			},
			valueFormatter: (value) => (typeof value === 'number' ? value.toFixed(3) : 'no data')
		},
		xAxis: {
			...categoryAxisStyle(mode),
			type: 'time',
			name: `Time, ${data.zone}`,
			nameLocation: 'middle',
			nameGap: 26,
			axisLabel: { ...categoryAxisStyle(mode).axisLabel, hideOverlap: true, formatter: time.short }
		},
		yAxis: { ...valueAxisStyle(mode), type: 'value', name: data.valueAxis, min: 0 },
		dataZoom: mode === 'print' ? undefined : [{ type: 'inside', filterMode: 'none' }, zoomSlider(mode)],
		series: data.series.map((series, i) => ({
			type: 'line' as const,
			name: series.label,
			data: maskFlagged(series, data.flagged),
			showSymbol: false,
			symbol: phaseStyle(series.phase, mode).symbol,
			connectNulls: false,
			color: phaseStyle(series.phase, mode).color,
			lineStyle: {
				width: 1.25,
				color: phaseStyle(series.phase, mode).color,
				type: phaseStyle(series.phase, mode).dash
			},
			emphasis: { disabled: true },
			...(i === 0
				? {
						markLine: { silent: true, symbol: 'none', animation: false, data: rules },
						markArea: {
							silent: true,
							itemStyle: { color: palette.slate, opacity: 0.22 },
							data: data.flagged.map((f): [{ xAxis: number }, { xAxis: number }] => [
								{ xAxis: f.from_ms },
								{ xAxis: f.to_ms }
							])
						}
					}
				: {})
		}))
	};
}

function rule(line: { label: string; value: number }, color: string, type: 'solid' | number[]) {
	return {
		yAxis: line.value,
		lineStyle: { color, width: 1.5, type },
		label: {
			formatter: line.label,
			position: 'insideStartTop' as const,
			color,
			fontFamily: 'IBM Plex Sans',
			fontSize: 12
		}
	};
}

function zoomSlider(mode: ChartMode) {
	const palette = CHART_PALETTES[mode];
	return {
		type: 'slider' as const,
		filterMode: 'none' as const,
		height: 18,
		bottom: 4,
		showDataShadow: false,
		brushSelect: false,
		showDetail: false,
		borderColor: palette.edge,
		fillerColor: `${palette.copper}22`,
		handleStyle: { color: palette.ground, borderColor: palette.copper },
		moveHandleStyle: { color: palette.copper, opacity: 0.5 }
	};
}

/** Points for drawing: a value inside a flagged interval becomes a gap, as one that was never measured is. */
export function maskFlagged(
	series: Pick<TrendData['series'][number], 'times_ms' | 'values'>,
	flagged: TrendData['flagged']
): [number, number | null][] {
	const points: [number, number | null][] = [];
	let at = 0;
	for (let i = 0; i < series.times_ms.length; i++) {
		const time = series.times_ms[i] as number;
		while (at < flagged.length && (flagged[at]?.to_ms ?? 0) <= time) at++;
		const mask = flagged[at];
		const value = series.values[i] ?? null;
		const hidden = mask !== undefined && time >= mask.from_ms;
		points.push([time, hidden || value === null || Number.isNaN(value) ? null : value]);
	}
	return points;
}

function timeFormat(zone: string) {
	const day = new Intl.DateTimeFormat('en-GB', { timeZone: zone, day: 'numeric', month: 'short' });
	const clock = new Intl.DateTimeFormat('en-GB', {
		timeZone: zone,
		hour: '2-digit',
		minute: '2-digit',
		hourCycle: 'h23'
	});
	const full = (value: number) => `${day.format(value)}, ${clock.format(value)}`;
	return {
		full,
		short: (value: number) => (clock.format(value) === '00:00' ? day.format(value) : full(value))
	};
}

export function trendTable(data: TrendData): ChartTable {
	const isFlagged = (time: number) => data.flagged.some((f) => time >= f.from_ms && time < f.to_ms);
	const { full } = timeFormat(data.zone);
	return {
		columns: [
			{ label: `Interval start, ${data.zone}` },
			{ label: 'Series' },
			{ label: data.valueAxis, numeric: true, digits: 3 },
			{ label: 'Flagged' }
		],
		rows: data.series.flatMap((series) =>
			Array.from({ length: series.times_ms.length }, (_, i) => {
				const time = series.times_ms[i] as number;
				const value = series.values[i] ?? null;
				return [
					full(time),
					series.label,
					value === null || Number.isNaN(value) ? null : value,
					isFlagged(time) ? 'yes' : 'no'
				];
			})
		)
	};
}
