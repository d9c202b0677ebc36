import type { Actor } from '../../access/access';
import {
	canOverrule,
	LEAST_REASON_CHARACTERS,
	MOST_REASON_CHARACTERS,
	type StandingCheck
} from '../../checks/overrule';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import { surveyChecks, type SurveyChecks } from '../read-models/survey-checks';
import { checkOverrulesRepository } from '../repositories/check-overrules.repository';
import { scopeOf } from '../repositories/scope';
import { surveysRepository } from '../repositories/surveys.repository';
import type { ServiceDeps } from '../service-deps';
import { queueReassessment } from './assessments/queue-reassessment';

/** Which check is meant: of a capture, or of all together where `captureId` is null. */
export interface CheckReference {
	captureId: string | null;
	code: string;
	channelIndex: number | null;
	/** The finding as the person read it; one that reads otherwise by now is not what they spoke about. */
	sentence: string;
}

/** The checks of a survey's captures, and an engineer's word against them. */
export function createChecksService({ db, clock, jobs }: ServiceDeps) {
	async function ofSurvey(actor: Actor, surveyId: string): Promise<SurveyChecks> {
		requirePermission(actor, 'capture.read');
		return requireFound(await surveyChecks(db, scopeOf(actor), surveyId), 'survey');
	}

	/** What is said against a check holds from now on; the survey is judged anew. */
	async function overrule(
		actor: Actor,
		surveyId: string,
		reference: CheckReference,
		reason: string
	): Promise<void> {
		requirePermission(actor, 'capture.write');
		const said = reason.trim();
		if (said.length < LEAST_REASON_CHARACTERS || said.length > MOST_REASON_CHARACTERS)
			throw new AppError(
				'invalid',
				`State the reason in ${LEAST_REASON_CHARACTERS} to ${MOST_REASON_CHARACTERS} characters: it is printed in the report.`
			);
		await withTransaction(db, async (trx) => {
			await requireOpen(trx, actor, surveyId);
			const found = await standingCheck(trx, actor, surveyId, reference);
			if (!found || !canOverrule(found.check) || found.overrule !== null)
				throw new AppError(
					'conflict',
					'There is nothing to overrule here any more. Load the page again to see how the check stands.'
				);
			const now = clock();
			const id = await checkOverrulesRepository(trx, scopeOf(actor)).add({
				survey_id: surveyId,
				capture_id: reference.captureId,
				code: reference.code,
				channel_index: reference.channelIndex,
				sentence: reference.sentence,
				reason: said,
				overruled_by: actor.userId,
				created_at: now.toISOString()
			});
			await appendAudit(
				trx,
				actor,
				{
					action: 'check.overruled',
					subjectKind: 'check',
					subjectId: id,
					detail: { surveyId, ...reference, reason: said }
				},
				now
			);
			await queueReassessment(trx, jobs, actor.practiceId, { surveyId });
		});
	}

	/** The finding stands again; that it was overruled stays on record. */
	async function takeBack(actor: Actor, surveyId: string, overruleId: string): Promise<void> {
		requirePermission(actor, 'capture.write');
		await withTransaction(db, async (trx) => {
			await requireOpen(trx, actor, surveyId);
			const overrules = checkOverrulesRepository(trx, scopeOf(actor));
			const known = requireFound(
				(await overrules.ofSurvey(surveyId)).find(({ id }) => id === overruleId),
				'overrule'
			);
			const now = clock();
			if (!(await overrules.takeBack(known.id, actor.userId, now.toISOString())))
				throw new AppError('conflict', 'This was taken back already.');
			await appendAudit(
				trx,
				actor,
				{
					action: 'check.overrule-taken-back',
					subjectKind: 'check',
					subjectId: known.id,
					detail: { surveyId, code: known.code, reason: known.reason }
				},
				now
			);
			await queueReassessment(trx, jobs, actor.practiceId, { surveyId });
		});
	}

	return { ofSurvey, overrule, takeBack };
}

async function requireOpen(trx: Db, actor: Actor, surveyId: string): Promise<void> {
	const survey = requireFound(await surveysRepository(trx, scopeOf(actor)).byId(surveyId), 'survey');
	if (survey.status === 'closed')
		throw new AppError('conflict', 'This survey is closed. Open it again before changing its checks.');
}

async function standingCheck(
	trx: Db,
	actor: Actor,
	surveyId: string,
	{ captureId, code, channelIndex, sentence }: CheckReference
): Promise<StandingCheck | undefined> {
	const checks = await surveyChecks(trx, scopeOf(actor), surveyId);
	const candidates = checks ? [...checks.together, ...checks.captures.flatMap((one) => one.checks)] : [];
	return candidates.find(
		(one) =>
			one.captureId === captureId &&
			one.check.code === code &&
			one.check.channelIndex === channelIndex &&
			one.check.sentence === sentence
	);
}

export type ChecksService = ReturnType<typeof createChecksService>;
