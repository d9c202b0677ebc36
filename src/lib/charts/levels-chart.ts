import type { EChartsOption } from 'echarts';
import type { ChartTable } from './chart-table';
import {
	CHART_PALETTES,
	axisTextStyle,
	categoryAxisStyle,
	chartBase,
	headroom,
	legendStyle,
	tooltipStyle,
	valueAxisStyle,
	type ChartMode,
	type ChartSize
} from './theme';

export interface LevelsData {
	/** Quantity and unit. */
	axis: string;
	/** Measured beside expected; null where nothing is expected, or the accepted band is open. */
	bars: readonly {
		label: string;
		measured: number;
		expected: number | null;
		low: number | null;
		high: number | null;
	}[];
}

const MEASURED = 'measured';
const EXPECTED = 'expected';

/** Measured levels as bars beside what was expected; a bar outside its band is drawn in the colour of a fault. */
export function buildLevelsOption(
	data: LevelsData,
	mode: ChartMode,
	size: ChartSize = { width_px: 560, height_px: 260 }
): EChartsOption {
	const palette = CHART_PALETTES[mode];
	const hasExpected = data.bars.some(({ expected }) => expected !== null);
	const legend = hasExpected ? [MEASURED, EXPECTED] : [];
	const room = headroom(legend, data.axis, size.width_px);
	return {
		...chartBase(mode),
		legend: { ...legendStyle(mode), show: hasExpected, data: legend.map((name) => ({ name, icon: 'rect' })) },
		grid: {
			left: 8,
			right: 12,
			top: room.top_px,
			bottom: 8,
			outerBoundsMode: 'same',
			outerBoundsContain: 'axisLabel'
		},
		tooltip: { ...tooltipStyle(mode), trigger: 'axis', axisPointer: { type: 'none' } },
		xAxis: {
			...categoryAxisStyle(mode),
			type: 'category',
			data: data.bars.map(({ label }) => label),
			axisLabel: { ...axisTextStyle(mode), interval: 0, hideOverlap: false, width: 76, overflow: 'break' }
		},
		yAxis: { ...valueAxisStyle(mode), type: 'value', name: room.axisName },
		series: [
			{
				type: 'bar',
				name: MEASURED,
				color: palette.copper,
				barMaxWidth: 34,
				data: data.bars.map(({ measured, low, high }) => ({
					value: significant(measured),
					itemStyle: { color: isOutside(measured, low, high) ? palette.oxide : palette.copper }
				})),
				label: {
					show: data.bars.length <= 8,
					position: 'top',
					color: palette.ink,
					formatter: ({ value }) => String(value)
				}
			},
			...(hasExpected
				? [
						{
							type: 'bar' as const,
							name: EXPECTED,
							barMaxWidth: 34,
							color: palette.edge,
							itemStyle: { color: 'transparent', borderColor: palette.edge, borderWidth: 1.25 },
							data: data.bars.map(({ expected }) => (expected === null ? '-' : significant(expected)))
						}
					]
				: [])
		]
	};
}

function significant(value: number): number {
	return Number(value.toPrecision(4));
}

function isOutside(value: number, low: number | null, high: number | null): boolean {
	return (low !== null && value < low) || (high !== null && value > high);
}

export function levelsTable(data: LevelsData): ChartTable {
	const column = (label: string) => ({ label, numeric: true, digits: 3 });
	return {
		columns: [
			{ label: 'What' },
			column(`Measured; ${data.axis}`),
			column('Expected'),
			column('Accepted from'),
			column('Accepted to')
		],
		rows: data.bars.map(({ label, measured, expected, low, high }) => [label, measured, expected, low, high])
	};
}
