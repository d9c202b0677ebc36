import type { IntervalKind } from '../../harmonics/intervals';
import { joinParts } from '../analysis/join-parts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { AnalysisRow, AnalysisScalarRow, AnalysisSeriesRow, StoredInterval } from '../db/rows';
import type { Scope } from './scope';

const ASSESSED_COLUMNS = [
	'quantity',
	'phase',
	'interval',
	'interval_count',
	'starts_ms',
	'lengths_s',
	'rms',
	'frequency_hz',
	'subgroups',
	'flagged'
] as const;
export type AssessedColumns = Pick<AnalysisSeriesRow, (typeof ASSESSED_COLUMNS)[number]> & {
	interval: IntervalKind;
};

export type NewSeriesRow = Omit<AnalysisSeriesRow, 'id' | 'practice_id' | 'analysis_id'>;
export type NewScalarRow = Omit<AnalysisScalarRow, 'id' | 'practice_id' | 'analysis_id'>;

/** Windows that are read without being asked for by name: ten minutes of them, and some. */
const MOST_WINDOWS = 3200;

/** Rows in the order of their parts, those of one series joined. */
function joinedParts(rows: readonly AssessedColumns[]): AssessedColumns[] {
	const groups = new Map<string, AssessedColumns[]>();
	for (const row of rows) {
		const key = `${row.quantity}/${row.phase}/${row.interval}`;
		groups.set(key, [...(groups.get(key) ?? []), row]);
	}
	return [...groups.values()].map((parts) => joinParts(parts));
}

/** What one span, or the end, of an analysis leaves behind. */
export interface AnalysisPart {
	series: readonly NewSeriesRow[];
	scalars: readonly NewScalarRow[];
}

/** Analyses of one practice (and of one client when given). The newest of a capture is its current one. */
export function analysesRepository(db: Db, scope: Scope) {
	const own = () => {
		const query = db('analyses').where('analyses.practice_id', scope.practiceId);
		return scope.clientId === undefined ? query : query.where('analyses.client_id', scope.clientId);
	};

	async function addPart(analysisId: string, { series, scalars }: AnalysisPart): Promise<void> {
		const common = () => ({ id: newId(), practice_id: scope.practiceId, analysis_id: analysisId });
		for (const row of series) await db('analysis_series').insert({ ...row, ...common() });
		for (const row of scalars) await db('analysis_scalars').insert({ ...row, ...common() });
	}

	return {
		/** Opens an analysis that is stored part by part; it is nobody's result until it is completed. */
		async begin(
			analysis: Pick<AnalysisRow, 'client_id' | 'capture_id' | 'engine_version' | 'created_at'>
		): Promise<string> {
			const id = newId();
			await db('analyses').insert({
				...analysis,
				id,
				practice_id: scope.practiceId,
				parameters_json: '{}',
				summary_json: '{}',
				is_current: 0,
				is_finished: 0
			});
			return id;
		},
		addPart,
		/** Makes an analysis the current one. Earlier ones stay, for the reports that rest on them. */
		async complete(
			id: string,
			captureId: string,
			analysis: Pick<AnalysisRow, 'engine_version' | 'parameters_json' | 'summary_json' | 'created_at'>
		): Promise<void> {
			await own().where({ capture_id: captureId, is_current: 1 }).update({ is_current: 0 });
			await own()
				.where({ id })
				.update({ ...analysis, is_current: 1, is_finished: 1 });
		},
		/** Removes what an attempt that did not come to its end has left of a capture. */
		async discardUnfinished(captureId: string): Promise<void> {
			await own().where({ capture_id: captureId, is_finished: 0 }).delete();
		},
		/** Lets no analysis of a capture count any more, as its files are understood anew. They stay, for the reports that rest on them. */
		async retire(captureId: string): Promise<void> {
			await own().where({ capture_id: captureId, is_current: 1 }).update({ is_current: 0 });
		},
		async currentOf(captureId: string): Promise<AnalysisRow | null> {
			return (await own().where({ capture_id: captureId, is_current: 1 }).first()) ?? null;
		},
		async idsOf(captureId: string): Promise<string[]> {
			return own().where({ capture_id: captureId }).pluck('id');
		},
		/** Current analyses of a survey's captures, in the order the captures came. Removed captures are left out. */
		async currentOfSurvey(surveyId: string): Promise<AnalysisRow[]> {
			return own()
				.join('captures', 'captures.id', 'analyses.capture_id')
				.where('captures.survey_id', surveyId)
				.where('analyses.is_current', 1)
				.whereNull('captures.removed_at')
				.orderBy('captures.created_at')
				.select<AnalysisRow[]>('analyses.*');
		},
		/**
		 * Series without the columns that only the readings page shows, parts joined.
		 * intervals  when left out every kind, but the windows of a capture that has very many of them
		 */
		async seriesOf(analysisId: string, intervals?: readonly IntervalKind[]): Promise<AssessedColumns[]> {
			const query = db('analysis_series')
				.where({ practice_id: scope.practiceId, analysis_id: analysisId })
				.orderBy(['quantity', 'phase', 'interval', 'part'])
				.select<AssessedColumns[]>(ASSESSED_COLUMNS);
			if (intervals) return joinedParts(await query.whereIn('interval', [...intervals]));
			const windows = (await this.windowCountsOf(analysisId)).reduce((sum, count) => sum + count, 0);
			return joinedParts(
				await query.whereNotIn('interval', windows > MOST_WINDOWS ? ['whole', 'window'] : ['whole'])
			);
		},
		/** Series of one kind with every column, for the readings page; one part of it, or all. */
		async wholeSeriesOf(
			analysisId: string,
			interval: StoredInterval,
			part?: number
		): Promise<AnalysisSeriesRow[]> {
			const query = db('analysis_series')
				.where({ practice_id: scope.practiceId, analysis_id: analysisId, interval })
				.orderBy(['quantity', 'phase', 'part']);
			return part === undefined ? query : query.where({ part });
		},
		/** Number of windows in each part, in order of time. */
		async windowCountsOf(analysisId: string): Promise<number[]> {
			const rows = await db('analysis_series')
				.where({ practice_id: scope.practiceId, analysis_id: analysisId, interval: 'window' })
				.groupBy('part')
				.orderBy('part')
				.select<{ count: number }[]>(db.raw('max(interval_count) as count'));
			return rows.map((row) => row.count);
		},
		/** Scalars over one kind of interval, parts in order of time; one measure of them, or all. */
		async scalarsOf(
			analysisId: string,
			interval: StoredInterval,
			measure?: AnalysisScalarRow['measure']
		): Promise<AnalysisScalarRow[]> {
			const query = db('analysis_scalars')
				.where({ practice_id: scope.practiceId, analysis_id: analysisId, interval })
				.orderBy(['measure', 'phase', 'part']);
			return measure === undefined ? query : query.where({ measure });
		},
		async intervalKindsOf(analysisId: string): Promise<IntervalKind[]> {
			const kinds: StoredInterval[] = await db('analysis_series')
				.where({ practice_id: scope.practiceId, analysis_id: analysisId })
				.distinct()
				.pluck('interval');
			return kinds.filter((kind) => kind !== 'whole');
		}
	};
}
