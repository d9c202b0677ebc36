import { assessAndSave } from '../services/assessments/assess-survey';
import { assessSurvey } from './assess-survey.job';
import type { JobHandler } from './handlers';

/** Judges a survey anew from the current analyses of its captures. */
export const handle: JobHandler = async ({ db, clock }, rawPayload, context) => {
	const { surveyId } = assessSurvey.payload.parse(rawPayload);
	await context.progress(0, 1, 'comparing with the limits');
	await assessAndSave(
		db,
		{ practiceId: context.practiceId },
		surveyId,
		{ userId: null, name: 'Sinewright' },
		clock(),
		(trx) => context.finish(trx)
	);
};
