import type { Db } from '../../db/database';
import { assessSurvey } from '../../jobs/assess-survey.job';
import type { JobQueue } from '../../jobs/job-queue';

/** What changed under a verdict. */
export type ChangedBasis = { pointId: string } | { surveyId: string } | { instrumentId: string };

/**
 * Queues a new assessment of every open survey whose verdict rests on what changed. Call it inside the transaction
 * that changes it, so that no change goes without its new verdict. Surveys without a verdict are left alone.
 */
export async function queueReassessment(
	trx: Db,
	jobs: JobQueue,
	practiceId: string,
	changed: ChangedBasis
): Promise<void> {
	const surveys: { id: string }[] = await trx('surveys as s')
		.join('assessments as a', 'a.survey_id', 's.id')
		.where({ 's.practice_id': practiceId, 's.status': 'open', 'a.is_current': 1 })
		.andWhere((basis) => {
			if ('pointId' in changed) void basis.where('s.point_id', changed.pointId);
			else if ('surveyId' in changed) void basis.where('s.id', changed.surveyId);
			else
				void basis
					.where('s.instrument_id', changed.instrumentId)
					.orWhereIn(
						's.id',
						trx('captures')
							.where({ practice_id: practiceId, instrument_id: changed.instrumentId })
							.whereNull('removed_at')
							.select('survey_id')
					);
		})
		.distinct('s.id as id');
	for (const { id } of surveys) await jobs.enqueue(trx, assessSurvey, { surveyId: id }, { practiceId });
}
