import { thd_pctOfFundamental } from '../../../harmonics/distortion';
import type { ScalarMeasure } from '../../../harmonics/engine/scalar-columns';
import { ORDER_STRIDE, type IntervalKind } from '../../../harmonics/intervals';
import type { Phase } from '../../../recording/phase';
import { bufferToFloat64 } from '../../analysis/series-codec';
import type { Db } from '../../db/database';
import type { AnalysisScalarRow } from '../../db/rows';
import { analysesRepository, type AssessedColumns } from '../../repositories/analyses.repository';
import type { Scope } from '../../repositories/scope';
import { figure, type Figure } from './reading-figure';
import { byPhase } from './window-rows';

export interface PanelSeries {
	label: string;
	/** Look of the line. */
	phase: Phase;
	times_ms: number[];
	values: Figure[];
}

/** One quantity over the capture's intervals. */
export interface TimePanel {
	key: string;
	title: string;
	valueAxis: string;
	/** Empty for plain numbers. */
	unit: string;
	/** Whether the axis starts at zero: a voltage or a frequency would be a straight line then. */
	fromZero: boolean;
	series: PanelSeries[];
}

export interface OverTimeReadings {
	kind: 'over-time';
	interval: IntervalKind;
	kinds: IntervalKind[];
	intervalCount: number;
	/** Intervals in one point: more than one where a long course was thinned to what departs most. */
	intervalsPerPoint: number;
	panels: TimePanel[];
	flagged: { from_ms: number; to_ms: number }[];
}

/** More points than this are thinned before they travel. */
const MOST_POINTS = 1000;
/** Intervals from which on a line shows a course. */
const FEWEST = 4;
const ORDER: readonly IntervalKind[] = ['10min', '3s', 'window', '2h'];

interface Context {
	highestOrder: number;
	asked: IntervalKind | null;
	label: (phase: Phase) => string;
}

/** Everything that is followed over time, one panel for each quantity. */
export async function overTimeReadings(
	db: Db,
	scope: Scope,
	analysisId: string,
	rows: readonly AssessedColumns[],
	context: Context
): Promise<OverTimeReadings> {
	const count = (kind: IntervalKind) =>
		Math.max(0, ...rows.filter((row) => row.interval === kind).map((row) => row.interval_count));
	const kinds = ORDER.filter((kind) => count(kind) > 0);
	const interval =
		(context.asked && kinds.includes(context.asked) ? context.asked : null) ??
		kinds.find((kind) => count(kind) >= FEWEST) ??
		kinds[0] ??
		'window';
	const own = rows.filter((row) => row.interval === interval).sort(byPhase);
	const scalars = await analysesRepository(db, scope).scalarsOf(analysisId, interval);
	const step = Math.ceil(count(interval) / MOST_POINTS);
	const panels = [
		...levelPanels(own, context, step),
		...powerPanels(scalars, context, step),
		...otherPanels(own, scalars, context, step)
	];
	return {
		kind: 'over-time',
		interval,
		kinds: [...kinds],
		intervalCount: count(interval),
		intervalsPerPoint: Math.max(1, step),
		panels: panels.filter(({ series }) =>
			series.some(({ values }) => values.some((value) => value !== null))
		),
		flagged: own[0] ? flaggedStretches(own[0]) : []
	};
}

function levelPanels(own: readonly AssessedColumns[], context: Context, step: number): TimePanel[] {
	const of = (
		quantity: 'voltage' | 'current',
		values: (row: AssessedColumns) => Float64Array
	): PanelSeries[] =>
		own
			.filter((row) => row.quantity === quantity)
			.map((row) =>
				thinned(row.phase, context.label(row.phase), bufferToFloat64(row.starts_ms), values(row), step)
			);
	const rms = (row: AssessedColumns) => bufferToFloat64(row.rms);
	const thd = (row: AssessedColumns) => distortion(row, context.highestOrder);
	const frequency = own[0];
	return [
		{
			key: 'voltage',
			title: 'Voltage',
			unit: 'V',
			valueAxis: 'Voltage, V rms',
			fromZero: false,
			series: of('voltage', rms)
		},
		{
			key: 'current',
			title: 'Current',
			unit: 'A',
			valueAxis: 'Current, A rms',
			fromZero: true,
			series: of('current', rms)
		},
		{
			key: 'frequency',
			title: 'Frequency',
			unit: 'Hz',
			valueAxis: 'Frequency, Hz',
			fromZero: false,
			series: frequency
				? [
						thinned(
							'N',
							'fundamental',
							bufferToFloat64(frequency.starts_ms),
							bufferToFloat64(frequency.frequency_hz),
							step
						)
					]
				: []
		},
		{
			key: 'voltage-thd',
			title: 'Voltage distortion',
			unit: '%',
			valueAxis: 'THD of voltage, % of the fundamental',
			fromZero: true,
			series: of('voltage', thd)
		},
		{
			key: 'current-thd',
			title: 'Current distortion',
			unit: '%',
			valueAxis: 'THD of current, % of the fundamental',
			fromZero: true,
			series: of('current', thd)
		}
	];
}

function powerPanels(scalars: readonly AnalysisScalarRow[], context: Context, step: number): TimePanel[] {
	const series = (measure: ScalarMeasure) => scalarSeries(scalars, measure, context, step);
	return [
		{
			key: 'active-power',
			title: 'Active power',
			unit: 'W',
			valueAxis: 'Active power, W',
			fromZero: true,
			series: series('active-power')
		},
		{
			key: 'reactive-power',
			title: 'Reactive power of the fundamental',
			unit: 'var',
			valueAxis: 'Q_1, var (positive: inductive)',
			fromZero: true,
			series: series('fundamental-reactive-power')
		},
		{
			key: 'power-factor',
			title: 'Power factor',
			unit: '',
			valueAxis: 'Power factor P/S, true rms',
			fromZero: false,
			series: ratio(scalars, 'active-power', 'apparent-power', context, step)
		}
	];
}

function otherPanels(
	own: readonly AssessedColumns[],
	scalars: readonly AnalysisScalarRow[],
	context: Context,
	step: number
): TimePanel[] {
	const named = (measure: ScalarMeasure, label: string, phase: Phase) =>
		scalarSeries(scalars, measure, context, step).map((series) => ({ ...series, label, phase }));
	return [
		{
			key: 'unbalance',
			title: 'Unbalance',
			unit: '%',
			valueAxis: 'Percent of the positive sequence',
			fromZero: true,
			series: [
				...named('negative-sequence-voltage', 'voltage u2', 'L1'),
				...named('zero-sequence-voltage', 'voltage u0', 'L2'),
				...named('negative-sequence-current', 'current, negative', 'L3')
			]
		},
		{
			key: 'crest',
			title: 'Crest factor of the currents',
			unit: '',
			valueAxis: 'Greatest peak over rms',
			fromZero: false,
			series: crestFactors(own, scalars, context, step)
		},
		{
			key: 'flicker',
			title: 'Flicker, short term',
			unit: '',
			valueAxis: 'P_st',
			fromZero: true,
			series: scalarSeries(scalars, 'short-term-flicker', context, step)
		},
		{
			key: 'long-flicker',
			title: 'Flicker, long term',
			unit: '',
			valueAxis: 'P_lt',
			fromZero: true,
			series: scalarSeries(scalars, 'long-term-flicker', context, step)
		}
	];
}

function distortion(row: AssessedColumns, highestOrder: number): Float64Array {
	const subgroups = bufferToFloat64(row.subgroups);
	const rms = bufferToFloat64(row.rms);
	return rms.map((value, i) =>
		thd_pctOfFundamental(subgroups.subarray(i * ORDER_STRIDE, (i + 1) * ORDER_STRIDE), value, highestOrder)
	);
}

/** Parts of one scalar joined, per phase. */
function joined(scalars: readonly AnalysisScalarRow[], measure: ScalarMeasure, quantity?: string) {
	const byPhaseName = new Map<string, { times: number[]; values: number[] }>();
	for (const row of scalars) {
		if (row.measure !== measure || (quantity !== undefined && row.quantity !== quantity)) continue;
		const found = byPhaseName.get(row.phase) ?? { times: [], values: [] };
		found.times.push(...bufferToFloat64(row.starts_ms));
		found.values.push(...bufferToFloat64(row.values));
		byPhaseName.set(row.phase, found);
	}
	return byPhaseName;
}

function scalarSeries(
	scalars: readonly AnalysisScalarRow[],
	measure: ScalarMeasure,
	context: Context,
	step: number
): PanelSeries[] {
	return [...joined(scalars, measure)].map(([phase, { times, values }]) =>
		phase === 'total'
			? thinned('N', 'total', Float64Array.from(times), Float64Array.from(values), step)
			: thinned(
					phase as Phase,
					context.label(phase as Phase),
					Float64Array.from(times),
					Float64Array.from(values),
					step
				)
	);
}

function ratio(
	scalars: readonly AnalysisScalarRow[],
	above: ScalarMeasure,
	below: ScalarMeasure,
	context: Context,
	step: number
): PanelSeries[] {
	const denominators = joined(scalars, below);
	return [...joined(scalars, above)].flatMap(([phase, { times, values }]) => {
		const base = denominators.get(phase);
		if (!base || phase === 'total') return [];
		const quotients = Float64Array.from(values, (value, i) => value / base.values[i]!);
		return [
			thinned(phase as Phase, context.label(phase as Phase), Float64Array.from(times), quotients, step)
		];
	});
}

function crestFactors(
	own: readonly AssessedColumns[],
	scalars: readonly AnalysisScalarRow[],
	context: Context,
	step: number
): PanelSeries[] {
	const peaks = joined(scalars, 'peak', 'current');
	return own
		.filter((row) => row.quantity === 'current')
		.flatMap((row) => {
			const peak = peaks.get(row.phase);
			if (!peak || peak.values.length !== row.interval_count) return [];
			const rms = bufferToFloat64(row.rms);
			const factors = rms.map((value, i) => peak.values[i]! / value);
			return [thinned(row.phase, context.label(row.phase), bufferToFloat64(row.starts_ms), factors, step)];
		});
}

/** Of each stretch of `step` intervals the one that departs most from the mean of the course. */
function thinned(
	phase: Phase,
	label: string,
	times_ms: Float64Array,
	values: Float64Array,
	step: number
): PanelSeries {
	const out: PanelSeries = { phase, label, times_ms: [], values: [] };
	const known = values.filter((value) => !Number.isNaN(value));
	const mean = known.reduce((sum, value) => sum + value, 0) / Math.max(1, known.length);
	const size = Math.max(1, step);
	for (let from = 0; from < values.length; from += size) {
		let at = from;
		for (let i = from + 1; i < Math.min(values.length, from + size); i++) {
			const isFarther = Math.abs(values[i]! - mean) > Math.abs(values[at]! - mean);
			if (isFarther || Number.isNaN(values[at]!)) at = i;
		}
		out.times_ms.push(times_ms[at]!);
		out.values.push(figure(values[at]));
	}
	return out;
}

function flaggedStretches(row: AssessedColumns): { from_ms: number; to_ms: number }[] {
	const starts = bufferToFloat64(row.starts_ms);
	const lengths = bufferToFloat64(row.lengths_s);
	const stretches: { from_ms: number; to_ms: number }[] = [];
	row.flagged.forEach((flag, i) => {
		if (flag !== 1) return;
		const to_ms = starts[i]! + 1000 * lengths[i]!;
		const last = stretches.at(-1);
		if (last && starts[i]! - last.to_ms < 1) last.to_ms = to_ms;
		else stretches.push({ from_ms: starts[i]!, to_ms });
	});
	return stretches;
}
