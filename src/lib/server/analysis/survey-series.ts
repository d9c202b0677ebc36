import { mergeSeries } from '../../assessment/merge-series';
import { ORDER_STRIDE, type IntervalSeries } from '../../harmonics/intervals';
import type { Db } from '../db/database';
import { analysesRepository } from '../repositories/analyses.repository';
import { capturesRepository } from '../repositories/captures.repository';
import type { Scope } from '../repositories/scope';
import { decodeSeries } from './series-codec';

/** All that an assessment looks at, and where it came from. */
export interface SurveySeries {
	/** One per quantity, phase and interval kind, over all captures of the survey. */
	series: IntervalSeries[];
	analysisIds: string[];
	captures: { id: string; name: string; startedAt: string | null; duration_s: number; sha256s: string[] }[];
	/** Of the analyses; several, joined by a comma, where captures were analysed by different versions. */
	engineVersion: string;
}

/** Number of leading intervals that start before `time_ms`. */
function countBefore(series: IntervalSeries, time_ms: number): number {
	const index = series.starts_ms.findIndex((start_ms) => start_ms >= time_ms);
	return index < 0 ? series.starts_ms.length : index;
}

/** The series without its first `count` intervals. */
function withoutFirst(series: IntervalSeries, count: number): IntervalSeries {
	if (count === 0) return series;
	return {
		...series,
		starts_ms: series.starts_ms.subarray(count),
		lengths_s: series.lengths_s.subarray(count),
		rms: series.rms.subarray(count),
		frequency_Hz: series.frequency_Hz.subarray(count),
		subgroups: series.subgroups.subarray(count * ORDER_STRIDE),
		flagged: series.flagged.subarray(count)
	};
}

function end_ms(series: IntervalSeries): number {
	const last = series.starts_ms.length - 1;
	return last < 0 ? -Infinity : series.starts_ms[last]! + series.lengths_s[last]! * 1000;
}

/**
 * Lays series of one quantity, phase and interval kind end to end. Where captures overlap, the one that starts
 * later gives way: its intervals begin where the earlier one ends, so that no moment counts twice.
 * returns  the series, and how many intervals were left out for overlap
 */
export function concatenateInTime(parts: readonly IntervalSeries[]): {
	series: IntervalSeries;
	trimmed: number;
} {
	const ordered = parts
		.filter((part) => part.starts_ms.length > 0)
		.sort((a, b) => a.starts_ms[0]! - b.starts_ms[0]!);
	let covered_ms = -Infinity;
	let trimmed = 0;
	const kept: IntervalSeries[] = [];
	for (const part of ordered) {
		// Half a millisecond: what two recorders that count seconds differ by in the last binary digit.
		const overlap = countBefore(part, covered_ms - 0.5);
		trimmed += overlap;
		const rest = withoutFirst(part, overlap);
		if (rest.starts_ms.length > 0) kept.push(rest);
		covered_ms = Math.max(covered_ms, end_ms(part));
	}
	const empty = parts[0];
	if (kept.length === 0 && empty) return { series: empty, trimmed };
	return { series: mergeSeries(kept), trimmed };
}

/**
 * What an assessment reads of one analysis: 3 s and 10 min values, and the windows only where no 3 s value stands without
 * a flag (they can be many).
 */
async function assessedSeries(
	analyses: ReturnType<typeof analysesRepository>,
	analysisId: string
): Promise<IntervalSeries[]> {
	const series = (await analyses.seriesOf(analysisId, ['3s', '10min'])).map(decodeSeries);
	if (series.some((one) => one.flagged.includes(0))) return series;
	return [...series, ...(await analyses.seriesOf(analysisId, ['window'])).map(decodeSeries)];
}

/** Current analyses of a survey's captures, laid together. Without any analysis, `series` is empty. */
export async function seriesForSurvey(db: Db, scope: Scope, surveyId: string): Promise<SurveySeries> {
	const analysesOf = analysesRepository(db, scope);
	const analyses = await analysesOf.currentOfSurvey(surveyId);
	const captureRows = await capturesRepository(db, scope).ofSurvey(surveyId);
	const files = await capturesRepository(db, scope).filesOf(analyses.map((analysis) => analysis.capture_id));
	const used = captureRows.filter((row) => analyses.some((analysis) => analysis.capture_id === row.id));
	const groups = new Map<string, IntervalSeries[]>();
	for (const analysis of analyses) {
		for (const series of await assessedSeries(analysesOf, analysis.id)) {
			const key = `${series.quantity}/${series.phase}/${series.interval}`;
			groups.set(key, [...(groups.get(key) ?? []), series]);
		}
	}
	const joined = [...groups.values()].map(concatenateInTime);
	return {
		series: joined.map((result) => result.series),
		analysisIds: analyses.map((analysis) => analysis.id),
		captures: used.map((row) => ({
			id: row.id,
			name: row.name,
			startedAt: row.started_at,
			duration_s: row.duration_s,
			sha256s: files.filter((file) => file.capture_id === row.id).map((file) => file.sha256)
		})),
		engineVersion: [...new Set(analyses.map((analysis) => analysis.engine_version))].join(', ')
	};
}
