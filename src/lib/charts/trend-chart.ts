import type { EChartsOption } from 'echarts';
import type { Phase } from '../recording/phase';
import type { ChartTable } from './chart-table';
import {
	CHART_PALETTES,
	DEFAULT_CHART_SIZE,
	headroom,
	categoryAxisStyle,
	chartBase,
	chartFont,
	legendStyle,
	phaseStyle,
	tooltipStyle,
	valueAxisStyle,
	type ChartMode,
	type ChartSize
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
	/** False where the axis has to follow the values (a voltage, a frequency); true when left out. */
	fromZero?: boolean;
}

/** Values over time with the percentile and the limit drawn; flagged intervals masked. */
export function buildTrendOption(
	data: TrendData,
	mode: ChartMode,
	size: ChartSize = DEFAULT_CHART_SIZE
): EChartsOption {
	const room = headroom(
		data.series.map(({ label }) => label),
		data.valueAxis,
		size.width_px
	);
	const palette = CHART_PALETTES[mode];
	const shift_ms = siteShift_ms(data);
	const time = timeFormat(data, shift_ms);
	const rules = [
		...(data.limit ? [rule(data.limit, palette.ink, 'solid' as const, mode)] : []),
		...(data.percentile ? [rule(data.percentile, palette.copper, [6, 3], mode)] : [])
	];
	return {
		...chartBase(mode),
		useUTC: true,
		legend: { ...legendStyle(mode), itemWidth: 26, data: data.series.map(({ label }) => label) },
		grid: {
			left: 8,
			right: 16,
			top: room.top_px,
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
		yAxis: {
			...valueAxisStyle(mode),
			type: 'value',
			name: room.axisName,
			...(data.fromZero === false ? { scale: true } : {})
		},
		dataZoom: mode === 'print' ? undefined : [{ type: 'inside', filterMode: 'none' }, zoomSlider(mode)],
		series: [
			...data.series.map((series, i) => ({
				type: 'line' as const,
				name: series.label,
				data: maskFlagged(series, data.flagged).map(([at, value]) => [at + shift_ms, value]),
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
									{ xAxis: f.from_ms + shift_ms },
									{ xAxis: f.to_ms + shift_ms }
								])
							}
						}
					: {})
			})),
			reachOf(data, shift_ms)
		]
	};
}

/** Draws nothing, but lets the axis reach the limit and the percentile when every value lies below them. */
function reachOf(data: TrendData, shift_ms: number) {
	const levels = [data.limit?.value, data.percentile?.value].filter((level) => level !== undefined);
	const at = data.series.find((series) => series.times_ms.length > 0)?.times_ms[0];
	return {
		type: 'line' as const,
		name: 'reach',
		silent: true,
		showSymbol: false,
		tooltip: { show: false },
		lineStyle: { opacity: 0 },
		data: at === undefined || levels.length === 0 ? [] : [[at + shift_ms, Math.max(...levels)]]
	};
}

function rule(
	line: { label: string; value: number },
	color: string,
	type: 'solid' | number[],
	mode: ChartMode
) {
	return {
		yAxis: line.value,
		lineStyle: { color, width: 1.5, type },
		label: {
			formatter: line.label,
			position: 'insideEndTop' as const,
			color,
			backgroundColor: CHART_PALETTES[mode].ground,
			padding: [1, 4],
			fontFamily: chartFont(mode),
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

/**
 * Ticks fall on round hours of the axis, so the axis runs on the site's clock as it was at the first interval.
 * Labels are computed from the true instant: across a change to summer time they stay right.
 */
function siteShift_ms(data: TrendData): number {
	const first = data.series.find((series) => series.times_ms.length > 0)?.times_ms[0];
	if (first === undefined) return 0;
	const parts = new Intl.DateTimeFormat('en-GB', {
		timeZone: data.zone,
		year: 'numeric',
		month: 'numeric',
		day: 'numeric',
		hour: 'numeric',
		minute: 'numeric',
		second: 'numeric',
		hourCycle: 'h23'
	}).formatToParts(first);
	const part = (type: string) => Number(parts.find((p) => p.type === type)?.value);
	const wallClock_ms = Date.UTC(
		part('year'),
		part('month') - 1,
		part('day'),
		part('hour'),
		part('minute'),
		part('second')
	);
	return wallClock_ms - Math.floor(first / 1000) * 1000;
}

/** Courses shorter than this are read to the second. */
const SHORT_COURSE_MS = 900_000;

function isShortCourse(data: TrendData): boolean {
	const { times_ms } = data.series.find((series) => series.times_ms.length > 1) ?? { times_ms: [] };
	return times_ms.length > 1 && times_ms[times_ms.length - 1]! - times_ms[0]! < SHORT_COURSE_MS;
}

function timeFormat(data: TrendData, shift_ms: number) {
	const { zone } = data;
	const toTheSecond = isShortCourse(data);
	const day = new Intl.DateTimeFormat('en-GB', { timeZone: zone, day: 'numeric', month: 'short' });
	const clock = new Intl.DateTimeFormat('en-GB', {
		timeZone: zone,
		hour: '2-digit',
		minute: '2-digit',
		...(toTheSecond ? { second: '2-digit' as const } : {}),
		hourCycle: 'h23'
	});
	const full = (value: number) => `${day.format(value - shift_ms)}, ${clock.format(value - shift_ms)}`;
	if (toTheSecond) return { full, short: (value: number) => clock.format(value - shift_ms) };
	const short = (value: number) =>
		clock.format(value - shift_ms) === '00:00' ? day.format(value - shift_ms) : full(value);
	return { full, short };
}

export function trendTable(data: TrendData): ChartTable {
	const isFlagged = (time: number) => data.flagged.some((f) => time >= f.from_ms && time < f.to_ms);
	const { full } = timeFormat(data, 0);
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
