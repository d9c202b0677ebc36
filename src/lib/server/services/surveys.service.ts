import type { Actor } from '../../access/access';
import { formatSurveyNumber, type NewSurvey, type SurveyFacts } from '../../register/survey-facts';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import { loadSurveyChoices } from '../read-models/survey-choices';
import { loadSurveyHeader } from '../read-models/survey-header';
import { listSurveys, type SurveyListQuery } from '../read-models/survey-list';
import { loadSurveyPoint } from '../read-models/survey-point';
import { instrumentsRepository } from '../repositories/instruments.repository';
import { numberSequencesRepository } from '../repositories/number-sequences.repository';
import { pointsRepository } from '../repositories/points.repository';
import { scopeOf } from '../repositories/scope';
import { surveysRepository } from '../repositories/surveys.repository';
import type { ServiceDeps } from '../service-deps';
import { queueReassessment } from './assessments/queue-reassessment';

async function requireInstrument(trx: Db, actor: Actor, instrumentId: string): Promise<void> {
	if (instrumentId === '') return;
	requireFound(await instrumentsRepository(trx, scopeOf(actor)).byId(instrumentId), 'instrument');
}

/** Surveys: opened at a point, worked along their stages, closed and opened again. */
export function createSurveysService({ db, clock, jobs }: ServiceDeps) {
	async function setStatus(actor: Actor, surveyId: string, status: 'open' | 'closed'): Promise<void> {
		requirePermission(actor, 'register.write');
		const now = clock();
		await withTransaction(db, async (trx) => {
			const surveys = surveysRepository(trx, scopeOf(actor));
			const survey = requireFound(await surveys.byId(surveyId), 'survey');
			if (survey.status === status) return;
			await surveys.setStatus(surveyId, status, now.toISOString());
			await appendAudit(
				trx,
				actor,
				{
					action: status === 'closed' ? 'survey.closed' : 'survey.reopened',
					subjectKind: 'survey',
					subjectId: surveyId,
					detail: { number: survey.number }
				},
				now
			);
		});
	}

	return {
		async list(actor: Actor, query: SurveyListQuery) {
			requirePermission(actor, 'register.read');
			return listSurveys(db, scopeOf(actor), query);
		},

		/** Points, instruments and what else a new survey can be made from. */
		async choices(actor: Actor) {
			requirePermission(actor, 'register.read');
			return loadSurveyChoices(db, scopeOf(actor));
		},

		/** Title block and rail of a survey; one load for every page of it. */
		async header(actor: Actor, surveyId: string) {
			requirePermission(actor, 'register.read');
			return requireFound(await loadSurveyHeader(db, scopeOf(actor), surveyId), 'survey');
		},

		/** The first stage of the survey, with the point's facts. */
		async point(actor: Actor, surveyId: string) {
			requirePermission(actor, 'register.read');
			return requireFound(await loadSurveyPoint(db, scopeOf(actor), surveyId), 'survey');
		},

		async create(actor: Actor, entry: NewSurvey): Promise<string> {
			requirePermission(actor, 'register.write');
			const now = clock();
			return withTransaction(db, async (trx) => {
				const scope = scopeOf(actor);
				const point = requireFound(await pointsRepository(trx, scope).byId(entry.pointId), 'point');
				if (point.archived_at !== null)
					throw new AppError('conflict', 'This point is archived. Restore it, or choose another point.');
				await requireInstrument(trx, actor, entry.instrumentId);
				const number = formatSurveyNumber(await numberSequencesRepository(trx, scope).next('survey'));
				const id = await surveysRepository(trx, scope).add({
					point,
					number,
					title: entry.title,
					engineerId: actor.userId,
					instrumentId: entry.instrumentId === '' ? null : entry.instrumentId,
					notes: entry.notes,
					at: now.toISOString()
				});
				await appendAudit(
					trx,
					actor,
					{
						action: 'survey.created',
						subjectKind: 'survey',
						subjectId: id,
						detail: { number, title: entry.title, point: point.name }
					},
					now
				);
				return id;
			});
		},

		async update(actor: Actor, surveyId: string, facts: SurveyFacts): Promise<void> {
			requirePermission(actor, 'register.write');
			const now = clock();
			await withTransaction(db, async (trx) => {
				const surveys = surveysRepository(trx, scopeOf(actor));
				const before = requireFound(await surveys.byId(surveyId), 'survey');
				await requireInstrument(trx, actor, facts.instrumentId);
				await surveys.update(surveyId, facts, now.toISOString());
				await queueReassessment(trx, jobs, actor.practiceId, { surveyId });
				await appendAudit(
					trx,
					actor,
					{
						action: 'survey.changed',
						subjectKind: 'survey',
						subjectId: surveyId,
						detail: {
							title: facts.title,
							decisionRule: facts.decisionRule,
							decisionRuleBefore: before.decision_rule,
							instrumentId: facts.instrumentId,
							instrumentIdBefore: before.instrument_id
						}
					},
					now
				);
			});
		},

		close: (actor: Actor, surveyId: string) => setStatus(actor, surveyId, 'closed'),
		reopen: (actor: Actor, surveyId: string) => setStatus(actor, surveyId, 'open')
	};
}
