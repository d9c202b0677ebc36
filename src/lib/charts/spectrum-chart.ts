import type { CustomSeriesOption, EChartsOption } from 'echarts';
import type { Phase } from '../recording/phase';
import type { ChartTable } from './chart-table';
import { escapeHtml } from './escape-html';
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

export interface SpectrumData {
	/** Orders along the axis, ascending. */
	orders: readonly number[];
	/** One set of bars each; `values` is aligned with `orders`, null = no data. */
	phases: readonly { phase: Phase; label: string; values: readonly (number | null)[] }[];
	/** Limit at each order, null where none applies; null altogether for readings without a limit set. */
	limits: readonly (number | null)[] | null;
	/** Quantity and unit, e.g. "percent of demand current, weekly 95th percentile". */
	valueAxis: string;
}

const OVER = 'part over the limit';
const LIMIT = 'limit';

/** Bars per order, phases side by side; the limit as a step line over them; what exceeds it hatched. */
export function buildSpectrumOption(
	data: SpectrumData,
	mode: ChartMode,
	size: ChartSize = DEFAULT_CHART_SIZE
): EChartsOption {
	const palette = CHART_PALETTES[mode];
	const overLimit = data.phases.some((p) =>
		p.values.some((value, i) => value !== null && exceedance(value, data.limits?.[i] ?? null) > 0)
	);
	const legendNames = [
		...data.phases.map((p) => ({ name: p.label, icon: 'rect' })),
		...(overLimit ? [{ name: OVER, icon: 'rect' }] : []),
		...(data.limits ? [{ name: LIMIT, icon: 'path://M0 4h14v2h-14z' }] : [])
	];
	const room = headroom(
		legendNames.map(({ name }) => name),
		data.valueAxis,
		size.width_px
	);
	return {
		...chartBase(mode),
		legend: { ...legendStyle(mode), data: legendNames },
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
			data: data.orders.map(String),
			name: 'Harmonic order',
			nameLocation: 'middle',
			nameGap: 26,
			axisTick: { show: false },
			axisLabel: {
				...categoryAxisStyle(mode).axisLabel,
				interval: labelEvery(data.orders),
				hideOverlap: true
			}
		},
		yAxis: { ...valueAxisStyle(mode), type: 'value', name: room.axisName, min: 0 },
		series: [
			...data.phases.flatMap((p) => phaseBars(p, data.limits, mode, overLimit)),
			...(data.limits ? [limitSteps(data.limits, mode)] : [])
		]
	};
}

function exceedance(value: number, limit: number | null): number {
	return limit !== null && value > limit ? value - limit : 0;
}

/** Odd orders carry the labels where even ones are drawn as well: they are the ones looked for. */
function labelEvery(orders: readonly number[]) {
	const everySecond = orders.length > 26;
	return (index: number) => {
		const order = orders[index] ?? 0;
		return everySecond ? order % 2 === 1 && (orders.length < 45 || order % 4 === 1 || order <= 13) : true;
	};
}

function phaseBars(
	p: SpectrumData['phases'][number],
	limits: SpectrumData['limits'],
	mode: ChartMode,
	overLimit: boolean
) {
	const palette = CHART_PALETTES[mode];
	const within = p.values.map((value, i) =>
		value === null ? '-' : value - exceedance(value, limits?.[i] ?? null)
	);
	const base = {
		type: 'bar' as const,
		stack: p.phase,
		barMaxWidth: 10,
		barCategoryGap: '28%',
		barGap: '0%',
		emphasis: { disabled: true }
	};
	const bars = [
		{ ...base, name: p.label, itemStyle: { color: phaseStyle(p.phase, mode).color }, data: within }
	];
	if (!overLimit) return bars;
	const over = p.values.map((value, i) => {
		const excess = value === null ? 0 : exceedance(value, limits?.[i] ?? null);
		return excess > 0 ? excess : '-';
	});
	return [
		...bars,
		{
			...base,
			name: OVER,
			itemStyle: {
				color: palette.ground,
				borderColor: palette.oxide,
				borderWidth: 1,
				decal: {
					symbol: 'rect',
					symbolSize: 1,
					color: palette.oxide,
					dashArrayX: [1, 0],
					dashArrayY: [1.6, 2.4],
					rotation: -Math.PI / 4
				}
			},
			data: over
		}
	];
}

/** The limit as one step line over the full width of each order's band; it breaks where no limit applies. */
function limitSteps(limits: readonly (number | null)[], mode: ChartMode): CustomSeriesOption {
	const palette = CHART_PALETTES[mode];
	return {
		type: 'custom',
		name: LIMIT,
		silent: true,
		z: 5,
		color: palette.ink,
		itemStyle: { color: palette.ink },
		// One item draws it all; its value lets the axis reach the greatest limit.
		data: [[0, Math.max(0, ...limits.filter((limit) => limit !== null))]],
		renderItem: (_, api) => {
			const size = api.size?.([1, 0]);
			const halfBand = (Array.isArray(size) ? (size[0] ?? 0) : (size ?? 0)) / 2;
			return {
				type: 'group',
				children: runsOf(limits).map((run) => ({
					type: 'polyline' as const,
					shape: {
						points: run.flatMap(({ index, limit }): [number, number][] => {
							const [x = 0, y = 0] = api.coord([index, limit]);
							return [
								[x - halfBand, y],
								[x + halfBand, y]
							];
						})
					},
					style: { stroke: palette.ink, lineWidth: 1.5, fill: 'none' }
				}))
			};
		}
	};
}

function runsOf(limits: readonly (number | null)[]): { index: number; limit: number }[][] {
	const runs: { index: number; limit: number }[][] = [];
	limits.forEach((limit, index) => {
		if (limit === null) return;
		const last = runs.at(-1);
		if (last && last.at(-1)?.index === index - 1) last.push({ index, limit });
		else runs.push([{ index, limit }]);
	});
	return runs;
}

function tooltipText(data: SpectrumData, parameters: unknown): string {
	const first: unknown = Array.isArray(parameters) ? parameters[0] : parameters;
	const index =
		typeof first === 'object' && first !== null && 'dataIndex' in first ? Number(first.dataIndex) : 0;
	const limit = data.limits?.[index];
	const lines = data.phases.map((p) => {
		const value = p.values[index];
		return `${escapeHtml(p.label)}: ${value === null || value === undefined ? 'no data' : value.toFixed(3)}`;
	});
	if (limit !== undefined && limit !== null) lines.push(`limit: ${limit.toFixed(2)}`);
	return [`<b>order ${data.orders[index] ?? ''}</b>`, ...lines].join('<br>');
}

export function spectrumTable(data: SpectrumData): ChartTable {
	return {
		columns: [
			{ label: 'Order', numeric: true, digits: 0 },
			...data.phases.map((p) => ({ label: p.label, numeric: true, digits: 3 })),
			...(data.limits ? [{ label: 'Limit', numeric: true, digits: 2 }] : [])
		],
		rows: data.orders.map((order, i) => [
			order,
			...data.phases.map((p) => p.values[i] ?? null),
			...(data.limits ? [data.limits[i] ?? null] : [])
		])
	};
}
