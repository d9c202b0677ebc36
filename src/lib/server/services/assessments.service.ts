import type { Actor } from '../../access/access';
import type { DecisionRule } from '../../assessment/assessment';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import { assessSurvey } from '../jobs/assess-survey.job';
import { loadVerdictPage, type VerdictQuery } from '../read-models/verdict-page';
import { limitSetsRepository } from '../repositories/limit-sets.repository';
import { scopeOf, type Scope } from '../repositories/scope';
import { surveysRepository } from '../repositories/surveys.repository';
import type { ServiceDeps } from '../service-deps';
import { assessAndSave } from './assessments/assess-survey';

/** Up to so many intervals a survey is judged while the person waits; about a second of work. */
const INLINE_INTERVALS = 60_000;

/** What a person may change on the verdict page: by which limits, by which rule. */
export interface JudgedBy {
	limitSetId: number;
	decisionRule: DecisionRule;
}

export type RefreshOutcome =
	{ kind: 'done'; assessmentId: string | null } | { kind: 'queued'; jobId: string };

async function intervalTotal(db: Db, scope: Scope, surveyId: string): Promise<number> {
	const row = await db('analysis_series as s')
		.join('analyses as a', 'a.id', 's.analysis_id')
		.join('captures as c', 'c.id', 'a.capture_id')
		.where({ 'c.practice_id': scope.practiceId, 'c.survey_id': surveyId, 'a.is_current': 1 })
		.whereNull('c.removed_at')
		.whereIn('s.interval', ['3s', '10min'])
		.sum<{ n: number | null }[]>({ n: 's.interval_count' })
		.first();
	return row?.n ?? 0;
}

/** Verdicts: made after every change of what they rest on, read with their reasons. */
export function createAssessmentsService({ db, clock, jobs }: ServiceDeps) {
	/** Judges now when that is quick, else in the worker. */
	async function refresh(actor: Actor, surveyId: string): Promise<RefreshOutcome> {
		requirePermission(actor, 'assessment.write');
		const scope = scopeOf(actor);
		requireFound(await surveysRepository(db, scope).byId(surveyId), 'survey');
		if ((await intervalTotal(db, scope, surveyId)) > INLINE_INTERVALS) {
			const jobId = await withTransaction(db, (trx) =>
				jobs.enqueue(trx, assessSurvey, { surveyId }, { practiceId: scope.practiceId })
			);
			return { kind: 'queued', jobId };
		}
		return { kind: 'done', assessmentId: await assessAndSave(db, scope, surveyId, actor, clock()) };
	}

	return {
		refresh,

		/** The verdict with its reasons; `query` chooses the table and how much of it is shown. */
		async page(actor: Actor, surveyId: string, query: VerdictQuery) {
			requirePermission(actor, 'assessment.read');
			return requireFound(await loadVerdictPage(db, scopeOf(actor), surveyId, query), 'survey');
		},

		/**
		 * Judges a survey's point by another limit set, the survey by another decision rule. The limit set belongs to
		 * the point: its other surveys are judged by it at their next assessment, too.
		 */
		async judgeBy(actor: Actor, surveyId: string, by: JudgedBy): Promise<RefreshOutcome> {
			requirePermission(actor, 'assessment.write');
			const now = clock();
			await withTransaction(db, async (trx) => {
				const scope = scopeOf(actor);
				const survey = requireFound(await surveysRepository(trx, scope).byId(surveyId), 'survey');
				if (survey.status === 'closed')
					throw new AppError(
						'conflict',
						'This survey is closed. Open it again before changing how it is judged.'
					);
				const limitSet = requireFound(
					await limitSetsRepository(trx, scope.practiceId).byId(by.limitSetId),
					'limit set'
				);
				const at = now.toISOString();
				const point = await trx('points')
					.where({ practice_id: scope.practiceId, id: survey.point_id })
					.first();
				if (point?.limit_set_id !== limitSet.id)
					await trx('points').where({ practice_id: scope.practiceId, id: survey.point_id }).update({
						limit_set_id: limitSet.id,
						limit_set_reason: 'Chosen at the assessment.',
						updated_at: at
					});
				await trx('surveys')
					.where({ practice_id: scope.practiceId, id: surveyId })
					.update({ decision_rule: by.decisionRule, updated_at: at });
				await appendAudit(
					trx,
					actor,
					{
						action: 'assessment.rule-changed',
						subjectKind: 'survey',
						subjectId: surveyId,
						detail: { limitSet: limitSet.key, decisionRule: by.decisionRule, before: survey.decision_rule }
					},
					now
				);
			});
			return refresh(actor, surveyId);
		}
	};
}

export type AssessmentsService = ReturnType<typeof createAssessmentsService>;
