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
	const column = 'pointId' in changed ? 's.point_id' : 'surveyId' in changed ? 's.id' : 's.instrument_id';
	const [value] = Object.values(changed);
	const surveys: { id: string }[] = await trx('surveys as s')
		.join('assessments as a', 'a.survey_id', 's.id')
		.where({ 's.practice_id': practiceId, 's.status': 'open', 'a.is_current': 1 })
		.andWhere(column, value as string)
		.distinct('s.id as id');
	for (const { id } of surveys) await jobs.enqueue(trx, assessSurvey, { surveyId: id }, { practiceId });
}
