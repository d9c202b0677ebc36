import { toAssessedPoint } from '../../register/assessed-point';
import type { AssessedPoint, DecisionRule } from '../../assessment/assessment';
import type { PhaseNames } from '../../recording/phase';
import type { PointFacts } from '../../register/point-facts';
import { pointGaps } from '../../register/point-gaps';
import {
	nextStage,
	surveyStages,
	type SurveyProgress,
	type SurveyStageKey,
	type SurveyStages
} from '../../register/survey-stages';
import type { Db } from '../db/database';
import type { PointRow, SurveyRow } from '../db/rows';
import { toPointFacts } from '../repositories/point-mapping';
import type { Scope } from '../repositories/scope';
import { limitsOfPoint } from './point-page';
import { loadSurveyProgress } from './survey-progress';

/** Title block and rail: what every page of a survey carries. */
export interface SurveyHeader {
	survey: {
		id: string;
		number: string;
		title: string;
		status: SurveyRow['status'];
		decisionRule: DecisionRule;
		engineerName: string;
		instrumentId: string | null;
		notes: string;
		createdAt: string;
	};
	client: { id: string; name: string };
	site: { id: string; name: string; timeZone: string };
	point: {
		id: string;
		name: string;
		phaseNames: PhaseNames;
		limitSetId: number | null;
		facts: PointFacts;
		assessed: AssessedPoint;
		/** I_sc ÷ I_L, unrounded; null when one of them is not known. */
		shortCircuitRatio: number | null;
	};
	/** Printed label of the limit class the ratio falls in; null where there is none. */
	ratioClass: string | null;
	/** "IEEE Std 519, 2022"; null when no limit set is chosen. */
	limitSetTitle: string | null;
	progress: SurveyProgress;
	stages: SurveyStages;
	next: SurveyStageKey;
}

type Joined = PointRow & {
	survey_id: string;
	survey_number: string;
	survey_title: string;
	survey_status: SurveyRow['status'];
	decision_rule: DecisionRule;
	survey_notes: string;
	survey_created_at: string;
	instrument_id: string | null;
	engineer_name: string;
	client_name: string;
	site_name: string;
	time_zone: string;
};

function findSurvey(db: Db, scope: Scope, surveyId: string): Promise<Joined | undefined> {
	const query = db('surveys as v')
		.join('points as p', 'p.id', 'v.point_id')
		.join('sites as s', 's.id', 'v.site_id')
		.join('clients as c', 'c.id', 'v.client_id')
		.join('users as u', 'u.id', 'v.engineer_id')
		.where({ 'v.practice_id': scope.practiceId, 'v.id': surveyId });
	if (scope.clientId !== undefined) void query.andWhere('v.client_id', scope.clientId);
	return query
		.select<Joined[]>('p.*', {
			survey_id: 'v.id',
			survey_number: 'v.number',
			survey_title: 'v.title',
			survey_status: 'v.status',
			decision_rule: 'v.decision_rule',
			survey_notes: 'v.notes',
			survey_created_at: 'v.created_at',
			instrument_id: 'v.instrument_id',
			engineer_name: 'u.name',
			client_name: 'c.name',
			site_name: 's.name',
			time_zone: 's.time_zone'
		})
		.first();
}

/** Null when the survey is not of this practice (or client). */
export async function loadSurveyHeader(db: Db, scope: Scope, surveyId: string): Promise<SurveyHeader | null> {
	const row = await findSurvey(db, scope, surveyId);
	if (!row) return null;
	const facts = toPointFacts(row);
	const assessed = toAssessedPoint(facts);
	const { demandCurrent_A, shortCircuitCurrent_A } = assessed;
	const progress: SurveyProgress = {
		surveyId,
		point: { kind: facts.kind, system: facts.system, gaps: pointGaps(facts) },
		...(await loadSurveyProgress(db, scope, surveyId, row.updated_at))
	};
	const stages = surveyStages(progress);
	const shortCircuitRatio =
		demandCurrent_A === null || shortCircuitCurrent_A === null
			? null
			: shortCircuitCurrent_A / demandCurrent_A;
	return {
		survey: {
			id: row.survey_id,
			number: row.survey_number,
			title: row.survey_title,
			status: row.survey_status,
			decisionRule: row.decision_rule,
			engineerName: row.engineer_name,
			instrumentId: row.instrument_id,
			notes: row.survey_notes,
			createdAt: row.survey_created_at
		},
		client: { id: row.client_id, name: row.client_name },
		site: { id: row.site_id, name: row.site_name, timeZone: row.time_zone },
		point: {
			id: row.id,
			name: row.name,
			phaseNames: facts.phaseNames,
			limitSetId: row.limit_set_id,
			facts,
			assessed,
			shortCircuitRatio
		},
		...(await limitsOfPoint(db, scope, facts)),
		progress,
		stages,
		next: nextStage(stages)
	};
}
