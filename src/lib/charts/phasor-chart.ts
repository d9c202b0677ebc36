import type { EChartsOption } from 'echarts';
import type { Phase } from '../recording/phase';
import type { ChartTable } from './chart-table';
import {
	CHART_PALETTES,
	axisTextStyle,
	chartBase,
	chartFont,
	phaseStyle,
	tooltipStyle,
	type ChartMode,
	type ChartSize
} from './theme';

export interface PhasorData {
	order: number;
	phasors: readonly {
		phase: Phase;
		/** Drawn in this colour where the arrow is no conductor's. */
		tone?: 'copper' | 'slate' | 'ink';
		label: string;
		quantity: 'voltage' | 'current';
		/** rms. */
		magnitude: number;
		unit: string;
		/** Degrees, counter-clockwise from the reference. */
		angle_deg: number;
	}[];
}

/** Share of the circle's radius that the longest arrow of a quantity reaches; currents stay inside the voltages. */
const REACH = { voltage: 0.78, current: 0.54 };

/** Arrows from the centre, angles counter-clockwise from the right; each quantity on a scale of its own. */
export function buildPhasorOption(
	data: PhasorData,
	mode: ChartMode,
	size: ChartSize = { width_px: 480, height_px: 380 }
): EChartsOption {
	const radius_px = Math.max(40, Math.min(size.width_px - 100, size.height_px - 56) / 2);
	const palette = CHART_PALETTES[mode];
	const longest = (quantity: 'voltage' | 'current') =>
		Math.max(...data.phasors.filter((p) => p.quantity === quantity).map((p) => p.magnitude));
	return {
		...chartBase(mode),
		tooltip: { ...tooltipStyle(mode), trigger: 'item' },
		polar: { center: ['50%', '50%'], radius: radius_px },
		angleAxis: {
			type: 'value',
			min: 0,
			max: 360,
			interval: 30,
			startAngle: 0,
			clockwise: false,
			axisLine: { lineStyle: { color: palette.ink } },
			axisTick: { show: true, length: 4, lineStyle: { color: palette.edge } },
			axisLabel: {
				...axisTextStyle(mode),
				formatter: (value: number) => (value === 360 ? '' : `${value > 180 ? `−${360 - value}` : value}°`)
			},
			splitLine: { show: true, lineStyle: { color: palette.rule } }
		},
		radiusAxis: {
			min: 0,
			max: 1,
			show: true,
			axisLine: { show: false },
			axisTick: { show: false },
			axisLabel: { show: false },
			splitNumber: 4,
			splitLine: { show: true, lineStyle: { color: palette.rule } }
		},
		series: data.phasors.map((p) => {
			const color = p.tone ? palette[p.tone] : phaseStyle(p.phase, mode).color;
			const angle = ((p.angle_deg % 360) + 360) % 360;
			const radius = (p.magnitude / longest(p.quantity)) * REACH[p.quantity];
			return {
				type: 'line' as const,
				coordinateSystem: 'polar' as const,
				name: p.label,
				color,
				lineStyle: {
					color,
					width: 2,
					type: p.quantity === 'voltage' ? ('solid' as const) : [5, 3]
				},
				showAllSymbol: true,
				data: [
					{ value: [0, angle], symbol: 'none' },
					{
						value: [radius, angle],
						symbol: 'triangle',
						symbolSize: [9, 12],
						// The symbol points up; screen angles run the same way as the phasor's.
						symbolRotate: angle - 90,
						itemStyle: { color },
						label: {
							show: true,
							formatter: p.label,
							position: labelSide(angle),
							color: palette.ink,
							fontFamily: chartFont(mode),
							fontSize: 12
						}
					}
				],
				tooltip: {
					formatter: () => `${p.magnitude.toPrecision(5)} ${p.unit} at ${p.angle_deg.toFixed(1)}°`
				}
			};
		})
	};
}

function labelSide(angle_deg: number): 'top' | 'bottom' | 'left' | 'right' {
	if (angle_deg < 45 || angle_deg >= 315) return 'right';
	if (angle_deg < 135) return 'top';
	return angle_deg < 225 ? 'left' : 'bottom';
}

export function phasorTable(data: PhasorData): ChartTable {
	return {
		columns: [
			{ label: 'Channel' },
			{ label: 'rms', numeric: true, digits: 3 },
			{ label: 'Unit' },
			{ label: 'Angle, °', numeric: true, digits: 2 }
		],
		rows: data.phasors.map((p) => [p.label, p.magnitude, p.unit, p.angle_deg])
	};
}
