import type { AssessedPoint } from '../../assessment/assessment';
import { tdd_pctOfDemandCurrent } from '../../harmonics/distortion';
import { MAX_ORDER, ORDER_STRIDE, type IntervalKind } from '../../harmonics/intervals';
import type { QualityRemark } from '../../harmonics/waveform-analysis';
import { formatPhase, type Phase } from '../../recording/phase';
import { toAssessedPoint } from '../../register/assessed-point';
import { parseSummary, type WaveformSummary } from '../analysis/analysis-summary';
import { baseValue, phaseBase, readingBasis, type ReadingBasis } from '../analysis/reading-basis';
import { bufferToFloat64 } from '../analysis/series-codec';
import { channelValues, type ChannelValues } from '../analysis/window-values';
import type { Db } from '../db/database';
import type { AnalysisRow, AnalysisSeriesRow, CaptureRow } from '../db/rows';
import { analysesRepository } from '../repositories/analyses.repository';
import { limitSetsRepository } from '../repositories/limit-sets.repository';
import type { Scope } from '../repositories/scope';
import type { CaptureSurvey } from './capture-list';
import { intervalTrend, percentileTable, type IntervalTrend, type PercentileTable } from './reading-trend';

export type Quantity = 'voltage' | 'current';

export interface ReadingsQuestion {
	quantity: Quantity;
	/** Window counted from 1; null = all windows taken together. */
	window: number | null;
	/** Order shown over time; 'total' is THD, or TDD where that is the limit's basis. */
	order: number | 'total';
	/** Null = the longest that holds two intervals or more. */
	interval: IntervalKind | null;
}

/** A figure for the screen: null = no data, never zero. */
type Figure = number | null;

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

export interface WaveformReadings {
	kind: 'waveform';
	highestOrder: number;
	cyclesPerWindow: number;
	windowCount: number;
	/** Counted from 1; null = all windows taken together. */
	window: number | null;
	/** Place of the window in the capture; null for all together. */
	place: { from_s: number; to_s: number; start_ms: number; flagged: boolean } | null;
	frequency_Hz: Figure;
	duration_s: number;
	channels: ReadingsChannel[];
	/** Phases of the chosen quantity, in the order of `orders[].phases`. */
	phases: { phase: Phase; label: string; unit: 'V' | 'A' }[];
	orders: { order: number; limit_pct: Figure; phases: OrderReading[] }[];
}

export interface TrendReadings {
	kind: 'trend';
	percentiles: PercentileTable;
}

export interface Readings {
	analysisId: string;
	engineVersion: string;
	analysedAt: string;
	intervalKinds: IntervalKind[];
	intervalCount: number;
	flaggedCount: number;
	quality: QualityRemark[];
	/** Quantities that this capture holds. */
	quantities: Quantity[];
	quantity: Quantity;
	basis: ReadingBasis;
	detail: WaveformReadings | TrendReadings;
	trend: IntervalTrend | null;
}

const figure = (value: number | undefined): Figure =>
	value !== undefined && Number.isFinite(value) ? Number(value.toPrecision(7)) : null;

const UNIT = { voltage: 'V', current: 'A' } as const;
const PHASE_ORDER: readonly Phase[] = ['L1', 'L2', 'L3', 'L1L2', 'L2L3', 'L3L1', 'N'];
/** Voltages before currents, each in the order of its conductors. */
const byQuantityAndPhase = (
	a: { quantity: Quantity; phase: Phase },
	b: { quantity: Quantity; phase: Phase }
) => (a.quantity === b.quantity ? byPhase(a, b) : a.quantity === 'voltage' ? -1 : 1);
const byPhase = (a: { phase: Phase }, b: { phase: Phase }) =>
	PHASE_ORDER.indexOf(a.phase) - PHASE_ORDER.indexOf(b.phase);

/** All that the readings page shows of one analysed capture. Null while the capture has no analysis. */
export async function readings(
	db: Db,
	scope: Scope,
	survey: CaptureSurvey,
	capture: CaptureRow,
	asked: ReadingsQuestion
): Promise<Readings | null> {
	const analyses = analysesRepository(db, scope);
	const analysis = await analyses.currentOf(capture.id);
	if (!analysis) return null;
	const summary = parseSummary(analysis.summary_json);
	const kinds = await analyses.intervalKindsOf(analysis.id);
	const point = toAssessedPoint(survey.facts);
	const limitSet =
		survey.facts.limitSetId === null
			? null
			: await limitSetsRepository(db, scope.practiceId).byId(survey.facts.limitSetId);
	const overview = await analyses.seriesOf(analysis.id);
	const quantities = (['voltage', 'current'] as const).filter((quantity) =>
		overview.some((row) => row.quantity === quantity)
	);
	const quantity = quantities.includes(asked.quantity) ? asked.quantity : (quantities[0] ?? asked.quantity);
	const highestOrder = summary.kind === 'waveform' ? summary.highestOrder : MAX_ORDER;
	const basis = readingBasis(limitSet, point, quantity, highestOrder);
	const own = overview.filter((row) => row.quantity === quantity).sort(byPhase);
	const label = (phase: Phase) => formatPhase(phase, survey.facts.phaseNames);
	const context = { point, basis, label, highestOrder };
	return {
		analysisId: analysis.id,
		engineVersion: analysis.engine_version,
		analysedAt: analysis.created_at,
		intervalKinds: kinds,
		intervalCount: summary.kind === 'waveform' ? summary.windowCount : summary.intervalCount,
		flaggedCount: summary.flaggedCount,
		quality: summary.quality,
		quantities,
		quantity,
		basis,
		detail:
			summary.kind === 'waveform'
				? await waveformReadings(db, scope, analysis, summary, { ...context, quantity, asked })
				: { kind: 'trend', percentiles: percentileTable(own, context) },
		trend: intervalTrend(own, kinds, { ...context, asked })
	};
}

interface WaveformContext {
	point: AssessedPoint;
	basis: ReadingBasis;
	label: (phase: Phase) => string;
	quantity: Quantity;
	asked: ReadingsQuestion;
}

/** Indexes of the windows asked for: one, or all that are not flagged (all, when every one is). */
function selectedWindows(row: AnalysisSeriesRow, window: number | null): number[] {
	if (window !== null) return [window - 1];
	const all = Array.from({ length: row.interval_count }, (_, i) => i);
	const valid = all.filter((i) => row.flagged[i] !== 1);
	return valid.length > 0 ? valid : all;
}

async function waveformReadings(
	db: Db,
	scope: Scope,
	analysis: AnalysisRow,
	summary: WaveformSummary,
	context: WaveformContext
): Promise<WaveformReadings> {
	const rows = (await analysesRepository(db, scope).wholeSeriesOf(analysis.id, 'window')).sort(
		byQuantityAndPhase
	);
	const first = rows[0];
	if (!first) throw new Error(`analysis ${analysis.id} has no windows`);
	const { asked } = context;
	const window =
		asked.window !== null && asked.window >= 1 && asked.window <= summary.windowCount ? asked.window : null;
	const windows = selectedWindows(first, window);
	const measured = rows.map((row) => ({ row, values: channelValues(row, windows, summary.highestOrder) }));
	const own = measured.filter(({ row }) => row.quantity === context.quantity);
	const frequencies = bufferToFloat64(first.frequency_hz);
	return {
		kind: 'waveform',
		highestOrder: summary.highestOrder,
		cyclesPerWindow: summary.cyclesPerWindow,
		windowCount: summary.windowCount,
		window,
		place: window === null ? null : placeOf(first, window - 1, parametersStart_ms(analysis)),
		frequency_Hz: figure(windows.reduce((sum, i) => sum + frequencies[i]!, 0) / windows.length),
		duration_s: summary.samples.duration_s,
		channels: measured.map(({ row, values }) => channelOf(row, values, summary, context)),
		phases: own.map(({ row }) => ({
			phase: row.phase,
			label: context.label(row.phase),
			unit: UNIT[row.quantity]
		})),
		orders: orderReadings(own, context, summary.highestOrder)
	};
}

function parametersStart_ms(analysis: AnalysisRow): number {
	return (JSON.parse(analysis.parameters_json) as { start_ms: number }).start_ms;
}

function placeOf(row: AnalysisSeriesRow, index: number, captureStart_ms: number): WaveformReadings['place'] {
	const start_ms = bufferToFloat64(row.starts_ms)[index]!;
	const from_s = (start_ms - captureStart_ms) / 1000;
	return {
		from_s,
		to_s: from_s + bufferToFloat64(row.lengths_s)[index]!,
		start_ms,
		flagged: row.flagged[index] === 1
	};
}

function channelOf(
	row: AnalysisSeriesRow,
	values: ChannelValues,
	summary: WaveformSummary,
	{ point, label }: WaveformContext
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
	{ point, basis }: WaveformContext,
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
