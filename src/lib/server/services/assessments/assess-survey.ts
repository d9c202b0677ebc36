import { assess } from '../../../assessment/assess';
import type { Assessment } from '../../../assessment/assessment';
import { toAssessedPoint } from '../../../register/assessed-point';
import { seriesForSurvey } from '../../analysis/survey-series';
import { appendAudit } from '../../audit/audit-log';
import { withTransaction, type Db } from '../../db/database';
import { canonicalJson } from '../../../report/measured-data';
import {
	assessmentsRepository,
	type AssessmentInputRecord,
	type StoredAssessment
} from '../../repositories/assessments.repository';
import { limitSetOfPoint } from '../../read-models/point-limit-set';
import { recordedChecks, surveyChecks } from '../../read-models/survey-checks';
import { surveyChain } from '../../read-models/survey-chain';
import { analysedCaptures, surveyEquipment } from '../../read-models/survey-equipment';
import { toPointFacts } from '../../repositories/point-mapping';
import { pointsRepository } from '../../repositories/points.repository';
import type { Scope } from '../../repositories/scope';
import { sitesRepository } from '../../repositories/sites.repository';
import { surveysRepository } from '../../repositories/surveys.repository';
import { STATED_ORDERS, surveyUncertainty } from './survey-uncertainty';

/** Who asked for it; the worker acts for nobody in particular after an analysis. */
export interface Assessor {
	userId: string | null;
	name: string;
}

export interface PreparedAssessment {
	clientId: string;
	engineVersion: string;
	input: AssessmentInputRecord;
	assessment: Assessment;
}

async function sourceHash(db: Db, limitSetId: number): Promise<string> {
	return (await db('limit_sets').where({ id: limitSetId }).first('source_sha256'))?.source_sha256 ?? '';
}

/**
 * Gathers a survey's series, point, limits and uncertainty, and judges them. Saves nothing.
 * returns  null while there is nothing to judge, or no limit set to judge by
 */
export async function prepareAssessment(
	db: Db,
	scope: Scope,
	surveyId: string
): Promise<PreparedAssessment | null> {
	const survey = await surveysRepository(db, scope).byId(surveyId);
	const pointRow = survey && (await pointsRepository(db, scope).byId(survey.point_id));
	const site = survey && (await sitesRepository(db, scope).byId(survey.site_id));
	if (!survey || !pointRow || !site) return null;
	const facts = toPointFacts(pointRow);
	const chosen = await limitSetOfPoint(db, scope, facts, site.time_zone);
	const gathered = await seriesForSurvey(db, scope, surveyId);
	if (chosen === null || gathered.series.length === 0) return null;
	const captures = await analysedCaptures(db, scope, surveyId);
	const equipment = await surveyEquipment(db, scope, surveyId, captures);
	const measuringChain = surveyChain(equipment, pointRow);
	const uncertainty = surveyUncertainty(
		equipment.map((one) => one.instrument),
		measuringChain
	);
	const point = toAssessedPoint(facts);
	const checks = await surveyChecks(db, scope, surveyId);
	const assessment = assess({
		point,
		limitSet: chosen.limitSet,
		series: gathered.series,
		siteTimeZone: site.time_zone,
		uncertainty,
		decisionRule: survey.decision_rule,
		blocked: checks?.blocked ?? []
	});
	return {
		clientId: survey.client_id,
		engineVersion: gathered.engineVersion,
		assessment,
		input: {
			point,
			siteTimeZone: site.time_zone,
			limitSet: {
				id: chosen.limitSet.id,
				key: chosen.limitSet.key,
				title: assessment.limitSetTitle,
				sourceSha256: await sourceHash(db, chosen.limitSet.id),
				reason: chosen.reason
			},
			uncertaintyAtOrders: STATED_ORDERS.map((order) => ({
				order,
				voltage_pct: uncertainty.voltage_pctOfReading(order),
				current_pct: uncertainty.current_pctOfReading(order)
			})),
			measuringChain,
			instrumentId: survey.instrument_id,
			analysisIds: gathered.analysisIds,
			captures: gathered.captures,
			...(checks === null ? {} : { checks: recordedChecks(checks) })
		}
	};
}

/** Same input, same outcome: a second assessment would only put drafts out of date. */
function isSame(prepared: PreparedAssessment, current: StoredAssessment | null): boolean {
	if (current === null || current.row.engine_version !== prepared.engineVersion) return false;
	const text = (input: AssessmentInputRecord, assessment: Assessment) => canonicalJson({ input, assessment });
	return text(prepared.input, prepared.assessment) === text(current.input, current.assessment);
}

async function makeCurrent(
	trx: Db,
	scope: Scope,
	surveyId: string,
	prepared: PreparedAssessment,
	assessor: Assessor,
	now: Date
): Promise<string> {
	const assessments = assessmentsRepository(trx, scope);
	const at = now.toISOString();
	const current = await assessments.currentOf(surveyId);
	if (current !== null && isSame(prepared, current)) {
		await assessments.confirmCurrent(current.row.id, at);
		return current.row.id;
	}
	const id = await assessments.addCurrent({ ...prepared, surveyId, createdBy: assessor.userId, at });
	const actor = { name: assessor.name, practiceId: scope.practiceId };
	await appendAudit(
		trx,
		assessor.userId === null ? { ...actor, userId: null } : { ...actor, userId: assessor.userId },
		{
			action: 'assessment.made',
			subjectKind: 'assessment',
			subjectId: id,
			detail: { surveyId, verdict: prepared.assessment.verdict, limitSet: prepared.input.limitSet.key }
		},
		now
	);
	return id;
}

/**
 * Judges a survey anew and makes the result current; without anything to judge, no verdict stands any more.
 * `finish` runs inside the saving transaction.
 */
export async function assessAndSave(
	db: Db,
	scope: Scope,
	surveyId: string,
	assessor: Assessor,
	now: Date,
	finish: (trx: Db) => Promise<void> = async () => undefined
): Promise<string | null> {
	const prepared = await prepareAssessment(db, scope, surveyId);
	return withTransaction(db, async (trx) => {
		if (prepared === null) await assessmentsRepository(trx, scope).retireCurrent(surveyId);
		const id = prepared && (await makeCurrent(trx, scope, surveyId, prepared, assessor, now));
		await finish(trx);
		return id;
	});
}
