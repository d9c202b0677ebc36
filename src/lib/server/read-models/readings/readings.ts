import { MAX_ORDER, type IntervalKind } from '../../../harmonics/intervals';
import type { QualityRemark } from '../../../harmonics/waveform-analysis';
import { formatPhase, type Phase } from '../../../recording/phase';
import { toAssessedPoint } from '../../../register/assessed-point';
import { parseSummary } from '../../analysis/analysis-summary';
import { readingBasis, type ReadingBasis } from '../../analysis/reading-basis';
import type { Db } from '../../db/database';
import type { CaptureRow } from '../../db/rows';
import { analysesRepository } from '../../repositories/analyses.repository';
import { limitSetsRepository } from '../../repositories/limit-sets.repository';
import type { Scope } from '../../repositories/scope';
import type { BlobStore } from '../../storage/blob-store';
import type { CaptureSurvey } from '../capture-list';
import { intervalTrend, percentileTable, type IntervalTrend, type PercentileTable } from '../reading-trend';
import { loadSurveyChain } from '../survey-chain';
import { samplePowers_W } from './point-windows';
import { powerReadings, type PowerReadings } from './power-view';
import { heatmapReadings, type HeatmapReadings, type HeatScale } from './heatmap-view';
import { interharmonicReadings, type InterharmonicReadings } from './interharmonics-view';
import { lossReadings, type LossReadings } from './losses-view';
import { overTimeReadings, type OverTimeReadings } from './over-time-view';
import type { NoIntervals, NoSamples, NoWaveform, ReadingView } from './reading-views';
import { reconstructionReadings, type ReconstructionReadings } from './reconstruction-view';
import { sequenceReadings, type SequenceReadings } from './sequence-view';
import { waveformReadings, type WaveformReadings } from './spectrum-view';
import { windowSamples } from './window-samples';
import { byPhase, captureStart_ms, windowRows, type Quantity, type WindowChoice } from './window-rows';

export interface ReadingsQuestion {
	view: ReadingView;
	quantity: Quantity;
	/** Window counted from 1; null = all windows taken together. */
	window: number | null;
	/** Order shown over time; 'total' is THD, or TDD where that is the limit's basis. */
	order: number | 'total';
	/** Null = the longest that holds two intervals or more. */
	interval: IntervalKind | null;
	/** Conductor of the order × time picture; null or left out = the first. */
	phase?: Phase | null;
	/** Null or left out = percent of the limit where there is one. */
	scale?: HeatScale | null;
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
	/** What the window chooser shows; null for a log of intervals. */
	choice: WindowChoice | null;
	detail:
		| WaveformReadings
		| TrendReadings
		| PowerReadings
		| SequenceReadings
		| LossReadings
		| OverTimeReadings
		| InterharmonicReadings
		| ReconstructionReadings
		| HeatmapReadings
		| NoIntervals
		| NoWaveform
		| NoSamples;
	/** Of the spectrum view only. */
	trend: IntervalTrend | null;
}

/** Views that look at all intervals of the capture. */
const WHOLE_COURSE: readonly ReadingView[] = ['spectrum', 'over-time', 'heatmap'];

/** All that one view of the readings page shows of one analysed capture. Null while the capture has no analysis. */
export async function readings(
	db: Db,
	blobs: BlobStore,
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
	const windows =
		summary.kind === 'waveform' ? await windowRows(db, scope, analysis, summary, asked.window) : null;
	const overview = WHOLE_COURSE.includes(asked.view) ? await analyses.seriesOf(analysis.id) : [];
	const quantities = (['voltage', 'current'] as const).filter((quantity) =>
		(windows?.rows ?? overview).some((row) => row.quantity === quantity)
	);
	const quantity = quantities.includes(asked.quantity) ? asked.quantity : (quantities[0] ?? asked.quantity);
	const highestOrder = summary.kind === 'waveform' ? summary.highestOrder : MAX_ORDER;
	const basis = readingBasis(limitSet, point, quantity, highestOrder);
	const own = overview.filter((row) => row.quantity === quantity).sort(byPhase);
	const label = (phase: Phase) => formatPhase(phase, survey.facts.phaseNames);
	const spectrum = (): WaveformReadings | TrendReadings =>
		summary.kind === 'waveform' && windows
			? waveformReadings(windows, summary, { point, basis, label, quantity })
			: { kind: 'trend', percentiles: percentileTable(own, { point, basis, label, highestOrder }) };
	const other = async (view: Exclude<ReadingView, 'spectrum'>): Promise<Readings['detail']> => {
		if (view === 'over-time')
			return overTimeReadings(db, scope, analysis.id, overview, {
				highestOrder,
				asked: asked.interval,
				label
			});
		if (view === 'heatmap')
			return (
				heatmapReadings(own, {
					point,
					basis,
					label,
					highestOrder,
					start_ms: captureStart_ms(analysis),
					asked: { phase: asked.phase ?? null, scale: asked.scale ?? null, interval: asked.interval }
				}) ?? { kind: 'no-intervals' }
			);
		if (!windows || summary.kind !== 'waveform') return { kind: 'no-waveform' };
		const { cyclesPerWindow, nominalFrequency_Hz } = summary;
		const samples = () => windowSamples(blobs, summary, windows, captureStart_ms(analysis));
		const context = { system: survey.facts.system, highestOrder, label };
		switch (view) {
			case 'power':
				return powerReadings(
					windows,
					context,
					await samplePowers_W(db, scope, analysis.id, windows.rows),
					await loadSurveyChain(db, scope, survey.id)
				);
			case 'sequence':
				return sequenceReadings(windows, context);
			case 'losses':
				return lossReadings(windows, {
					...context,
					frequency_Hz: nominalFrequency_Hz,
					rated:
						point.demandCurrent_A === null
							? null
							: { current_A: point.demandCurrent_A, from: 'the maximum demand current of the point' }
				});
			case 'interharmonics':
				return interharmonicReadings(windows, await samples(), {
					quantity,
					highestOrder,
					cyclesPerWindow,
					nominalFrequency_Hz,
					label
				});
			case 'reconstruction': {
				const found = await samples();
				const nameOf = (index: number) =>
					summary.channels.find(({ channelIndex }) => channelIndex === index)?.name ?? '';
				return found
					? reconstructionReadings(windows, found, { cyclesPerWindow, label, nameOf })
					: { kind: 'no-samples' };
			}
		}
	};
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
		choice: windows?.choice ?? null,
		detail: asked.view === 'spectrum' ? spectrum() : await other(asked.view),
		trend:
			asked.view === 'spectrum'
				? intervalTrend(own, kinds, { point, basis, label, highestOrder, asked })
				: null
	};
}
