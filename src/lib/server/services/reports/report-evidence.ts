import { intervalLevels, levelBaseOf, type LevelItem } from '../../../assessment/interval-levels';
import { nominalVoltageOn_V } from '../../../assessment/judged-phases';
import type { Assessment, VerdictRow } from '../../../assessment/assessment';
import { BASIS_WORDS } from '../../../assessment/wording';
import type { IntervalKind, IntervalSeries } from '../../../harmonics/intervals';
import type { LimitTable } from '../../../limits/limit-set';
import { formatPhase, PHASES, type PhaseNames } from '../../../recording/phase';
import type { ReportModel, ReportTrend, ReportWaveform } from '../../../report/report-model';
import { itemLong } from '../../../report/verdict-table';
import { concatenateInTime } from '../../analysis/survey-series';
import { readWaveformSlice } from '../../analysis/waveform-slice';
import type { WaveformSummary } from '../../analysis/analysis-summary';
import type { AssessmentInputRecord } from '../../repositories/assessments.repository';
import type { BlobStore } from '../../storage/blob-store';

/** One analysis of an assessment with what the report shows of it. */
export interface AnalysedCapture {
	captureName: string;
	start_ms: number;
	summary: WaveformSummary | null;
	series: IntervalSeries[];
}

const FLAGGED_LISTED = 200;
const LONGEST_FIRST: readonly IntervalKind[] = ['10min', '3s', 'window'];
/** Fewer ten-minute values than an hour's make no course of time worth a chart. */
const FEWEST_FOR_TREND = 6;
const WAVEFORM_POINTS = 900;

/** What 100 % of a row's value is on its own phase. */
function baseOfRow(row: Pick<VerdictRow, 'basis' | 'phase'>, point: AssessmentInputRecord['point']) {
	const fixed = row.basis === 'demand-current' ? point.demandCurrent_A : nominalVoltageOn_V(point, row.phase);
	return levelBaseOf(row.basis, fixed);
}

function levelItem(row: VerdictRow, table: LimitTable | undefined): LevelItem {
	if (row.item.kind === 'order') return row.item;
	const index = row.item.index;
	const orders = table?.totals.find((total) => total.index === index)?.ordersIncluded ?? { from: 2, to: 50 };
	return { kind: 'total', ...orders };
}

/** Flagged intervals, counted in the longest kind that each capture gives. */
export function qualityOf(
	captures: readonly AnalysedCapture[],
	checks: ReportModel['quality']['checks']
): ReportModel['quality'] {
	const flagged: ReportModel['quality']['flagged'] = [];
	let flaggedTotal = 0;
	let intervalTotal = 0;
	for (const { series } of captures) {
		const kind = LONGEST_FIRST.find((one) =>
			series.some((s) => s.interval === one && s.starts_ms.length > 0)
		);
		const shown = series.find((s) => s.interval === kind);
		if (shown === undefined) continue;
		intervalTotal += shown.starts_ms.length;
		shown.flagged.forEach((flag, i) => {
			if (flag !== 1) return;
			flaggedTotal += 1;
			if (flagged.length < FLAGGED_LISTED)
				flagged.push({
					interval: shown.interval,
					startsAt: new Date(shown.starts_ms[i] ?? 0).toISOString(),
					length_s: shown.lengths_s[i] ?? 0,
					quantity: shown.quantity,
					phase: shown.phase
				});
		});
	}
	return { checks, flagged, flaggedTotal, intervalTotal };
}

const number = (value: number | undefined): number | null =>
	value === undefined || !Number.isFinite(value) ? null : Number(value.toPrecision(7));

/** Course of the governing figure over ten-minute values, all phases; none from short captures. */
export function trendsOf(
	captures: readonly AnalysedCapture[],
	assessment: Assessment,
	input: AssessmentInputRecord,
	table: LimitTable | undefined
): ReportTrend[] {
	const { worst } = assessment;
	if (worst === null) return [];
	const item = levelItem(worst, table);
	const shown = PHASES.flatMap((phase) => {
		if (
			phase === 'N' ||
			!assessment.rows.some((row) => row.tableKey === worst.tableKey && row.phase === phase)
		)
			return [];
		const parts = captures.flatMap(({ series }) =>
			series.filter((s) => s.quantity === worst.quantity && s.phase === phase && s.interval === '10min')
		);
		const base = baseOfRow({ basis: worst.basis, phase }, input.point);
		if (parts.length === 0 || base === null) return [];
		const { series } = concatenateInTime(parts);
		return [{ phase, series, levels_pct: intervalLevels(series, item, base).levels_pct }];
	});
	const first = shown[0];
	if (first === undefined || first.series.starts_ms.length < FEWEST_FOR_TREND) return [];
	const flagged = [...first.series.flagged].flatMap((flag, i) => {
		const from_ms = first.series.starts_ms[i] ?? 0;
		return flag === 1 ? [{ from_ms, to_ms: from_ms + (first.series.lengths_s[i] ?? 0) * 1000 }] : [];
	});
	const name = itemLong(worst.item);
	return [
		{
			title: `${name.charAt(0).toUpperCase()}${name.slice(1)} of ${worst.quantity} over the time measured, 10-minute values`,
			quantity: worst.quantity,
			ofWhat: BASIS_WORDS[worst.basis],
			phases: shown.map(({ phase, series, levels_pct }) => ({
				phase,
				times_ms: Array.from(series.starts_ms),
				values_pct: Array.from(levels_pct, number)
			})),
			flagged,
			percentile: null,
			limit_pct: worst.limit_pct
		}
	];
}

/** The valid window of any waveform capture in which the governing figure is greatest. */
function worstWindow(
	captures: readonly AnalysedCapture[],
	row: VerdictRow,
	input: AssessmentInputRecord,
	item: LevelItem
) {
	const base = baseOfRow(row, input.point);
	let found: {
		capture: AnalysedCapture;
		summary: WaveformSummary;
		from_s: number;
		length_s: number;
		level: number;
	} | null = null;
	if (base === null) return null;
	for (const capture of captures) {
		const series = capture.series.find(
			(s) => s.quantity === row.quantity && s.phase === row.phase && s.interval === 'window'
		);
		if (series === undefined || capture.summary === null) continue;
		const { levels_pct } = intervalLevels(series, item, base, true);
		levels_pct.forEach((level, i) => {
			if (series.flagged[i] === 1 || Number.isNaN(level) || (found !== null && level <= found.level)) return;
			const from_s = ((series.starts_ms[i] ?? 0) - capture.start_ms) / 1000;
			found = {
				capture,
				summary: capture.summary as WaveformSummary,
				from_s,
				length_s: series.lengths_s[i] ?? 0,
				level
			};
		});
	}
	return found as {
		capture: AnalysedCapture;
		summary: WaveformSummary;
		from_s: number;
		length_s: number;
	} | null;
}

/** Waveform of that window on all mapped channels; null when only trend logs were taken, or the samples are gone. */
export async function waveformOf(
	blobs: BlobStore,
	captures: readonly AnalysedCapture[],
	assessment: Assessment,
	input: AssessmentInputRecord,
	table: LimitTable | undefined,
	names: PhaseNames
): Promise<ReportWaveform | null> {
	const { worst } = assessment;
	const window = worst === null ? null : worstWindow(captures, worst, input, levelItem(worst, table));
	if (worst === null || window === null) return null;
	const { summary } = window;
	if (!(await blobs.has(summary.samples.sha256))) return null;
	const from_s = Math.max(0, window.from_s);
	const to_s = from_s + window.length_s;
	const slice = await readWaveformSlice(
		blobs,
		summary.samples,
		{ from_s, to_s, points: WAVEFORM_POINTS },
		summary.channels.map((channel) => channel.channelIndex)
	);
	return {
		title: `Waveform of the worst window: ${itemLong(worst.item)} of ${worst.quantity}, phase ${formatPhase(worst.phase, names)}`,
		captureName: window.capture.captureName,
		from_s,
		to_s,
		channels: slice.channels.flatMap(({ channelIndex, points }) => {
			const channel = summary.channels.find((candidate) => candidate.channelIndex === channelIndex);
			if (channel === undefined) return [];
			const unit = channel.quantity === 'voltage' ? ('V' as const) : ('A' as const);
			return [{ quantity: channel.quantity, phase: channel.phase, unit, points }];
		})
	};
}
