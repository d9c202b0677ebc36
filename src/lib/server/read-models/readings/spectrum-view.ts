import type { AssessedPoint } from '../../../assessment/assessment';
import { tdd_pctOfDemandCurrent } from '../../../harmonics/distortion';
import { ORDER_STRIDE } from '../../../harmonics/intervals';
import type { Phase } from '../../../recording/phase';
import type { WaveformSummary } from '../../analysis/analysis-summary';
import { baseValue, phaseBase, type ReadingBasis } from '../../analysis/reading-basis';
import { bufferToFloat64 } from '../../analysis/series-codec';
import { channelValues, type ChannelValues } from '../../analysis/window-values';
import type { AnalysisSeriesRow } from '../../db/rows';
import { distortionTotals, type DistortionTotals } from './distortion-totals';
import { figure, type Figure } from './reading-figure';
import type { Quantity, WindowChoice, WindowRows } from './window-rows';

export interface ReadingsChannel {
	channelIndex: number;
	name: string;
	quantity: Quantity;
	phase: Phase;
	label: string;
	unit: 'V' | 'A';
	rms: Figure;
	fundamental: Figure;
	dc: Figure;
	peak: Figure;
	crest: Figure;
	thd_pctOfFundamental: Figure;
	/** Currents only, and only where I_L is known. */
	tdd_pctOfDemandCurrent: Figure;
	fundamentalAngle_deg: Figure;
}

/** One order on one phase. */
export interface OrderReading {
	magnitude: Figure;
	pctOfFundamental: Figure;
	pctOfBasis: Figure;
	angle_deg: Figure;
}

export interface WaveformReadings extends WindowChoice {
	kind: 'waveform';
	highestOrder: number;
	frequency_Hz: Figure;
	duration_s: number;
	channels: ReadingsChannel[];
	/** Phases of the chosen quantity, in the order of `orders[].phases`. */
	phases: { phase: Phase; label: string; unit: 'V' | 'A' }[];
	orders: { order: number; limit_pct: Figure; phases: OrderReading[] }[];
	/** Of the chosen quantity, in the order of `phases`. */
	totals: DistortionTotals[];
}

const UNIT = { voltage: 'V', current: 'A' } as const;

export interface SpectrumContext {
	point: AssessedPoint;
	basis: ReadingBasis;
	label: (phase: Phase) => string;
	quantity: Quantity;
}

/** Spectrum, figures and orders of a waveform over the chosen windows. */
export function waveformReadings(
	{ rows, windows, choice }: WindowRows,
	summary: WaveformSummary,
	context: SpectrumContext
): WaveformReadings {
	const measured = rows.map((row) => ({ row, values: channelValues(row, windows, summary.highestOrder) }));
	const own = measured.filter(({ row }) => row.quantity === context.quantity);
	const frequencies = bufferToFloat64(rows[0]!.frequency_hz);
	return {
		kind: 'waveform',
		...choice,
		highestOrder: summary.highestOrder,
		frequency_Hz: figure(windows.reduce((sum, i) => sum + frequencies[i]!, 0) / windows.length),
		duration_s: summary.samples.duration_s,
		channels: measured.map(({ row, values }) => channelOf(row, values, summary, context)),
		totals: distortionTotals(
			own.map(({ row }) => row),
			windows,
			summary.highestOrder,
			context.label
		),
		phases: own.map(({ row }) => ({
			phase: row.phase,
			label: context.label(row.phase),
			unit: UNIT[row.quantity]
		})),
		orders: orderReadings(own, context, summary.highestOrder)
	};
}

function channelOf(
	row: AnalysisSeriesRow,
	values: ChannelValues,
	summary: WaveformSummary,
	{ point, label }: SpectrumContext
): ReadingsChannel {
	const source = summary.channels.find((channel) => channel.channelIndex === row.channel_index);
	const isCurrent = row.quantity === 'current';
	return {
		channelIndex: row.channel_index ?? -1,
		name: source?.name ?? '',
		quantity: row.quantity,
		phase: row.phase,
		label: label(row.phase),
		unit: UNIT[row.quantity],
		rms: figure(values.rms),
		fundamental: figure(values.subgroups[1]),
		dc: figure(values.dc),
		peak: figure(values.peak),
		crest: figure(values.crest),
		thd_pctOfFundamental: figure(values.thd_pctOfFundamental),
		tdd_pctOfDemandCurrent:
			isCurrent && point.demandCurrent_A !== null
				? figure(tdd_pctOfDemandCurrent(values.subgroups, point.demandCurrent_A, summary.highestOrder))
				: null,
		fundamentalAngle_deg: figure(values.phases_deg[1])
	};
}

function orderReadings(
	measured: { row: AnalysisSeriesRow; values: ChannelValues }[],
	{ point, basis }: SpectrumContext,
	highestOrder: number
): WaveformReadings['orders'] {
	const bases = measured.map(({ row }) => phaseBase(basis.basis, point, row.phase));
	const orders = [];
	for (let order = 0; order < ORDER_STRIDE && order <= highestOrder; order++)
		orders.push({
			order,
			limit_pct: basis.limits_pct?.[order] ?? null,
			phases: measured.map(({ values }, i) => {
				const magnitude = values.subgroups[order]!;
				const fundamental = values.subgroups[1]!;
				return {
					magnitude: figure(magnitude),
					pctOfFundamental: figure((100 * magnitude) / fundamental),
					pctOfBasis: figure((100 * magnitude) / baseValue(bases[i] ?? null, fundamental)),
					angle_deg: order === 0 ? null : figure(values.phases_deg[order])
				};
			})
		});
	return orders;
}
