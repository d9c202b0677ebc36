import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { AnalysisRow, AnalysisSeriesRow } from '../db/rows';
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
export type AssessedColumns = Pick<AnalysisSeriesRow, (typeof ASSESSED_COLUMNS)[number]>;

export type NewSeriesRow = Omit<AnalysisSeriesRow, 'id' | 'practice_id' | 'analysis_id'>;

/** Analyses of one practice (and of one client when given). The newest of a capture is its current one. */
export function analysesRepository(db: Db, scope: Scope) {
	const own = () => {
		const query = db('analyses').where('analyses.practice_id', scope.practiceId);
		return scope.clientId === undefined ? query : query.where('analyses.client_id', scope.clientId);
	};

	return {
		/** Earlier analyses stay, for the reports that rest on them, but are current no longer. */
		async add(
			analysis: Pick<
				AnalysisRow,
				'client_id' | 'capture_id' | 'engine_version' | 'parameters_json' | 'summary_json' | 'created_at'
			>,
			series: readonly NewSeriesRow[]
		): Promise<string> {
			const id = newId();
			await own().where({ capture_id: analysis.capture_id, is_current: 1 }).update({ is_current: 0 });
			await db('analyses').insert({ ...analysis, id, practice_id: scope.practiceId, is_current: 1 });
			for (const row of series)
				await db('analysis_series').insert({
					...row,
					id: newId(),
					practice_id: scope.practiceId,
					analysis_id: id
				});
			return id;
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
		/** Series that an assessment looks at; the columns that only the readings page shows stay unread. */
		async seriesOf(analysisId: string): Promise<AssessedColumns[]> {
			return db('analysis_series')
				.where({ practice_id: scope.practiceId, analysis_id: analysisId })
				.orderBy(['quantity', 'phase', 'interval'])
				.select(ASSESSED_COLUMNS);
		},
		/** Series of one kind with every column, for the readings page. */
		async wholeSeriesOf(
			analysisId: string,
			interval: AnalysisSeriesRow['interval']
		): Promise<AnalysisSeriesRow[]> {
			return db('analysis_series')
				.where({ practice_id: scope.practiceId, analysis_id: analysisId, interval })
				.orderBy(['quantity', 'phase']);
		},
		async intervalKindsOf(analysisId: string): Promise<AnalysisSeriesRow['interval'][]> {
			return db('analysis_series')
				.where({ practice_id: scope.practiceId, analysis_id: analysisId })
				.distinct()
				.pluck('interval');
		}
	};
}
