import type { PointFacts } from '../../register/point-facts';
import type { Db } from '../db/database';
import type { SurveyRow } from '../db/rows';
import { toPointFacts } from '../repositories/point-mapping';
import type { Scope } from '../repositories/scope';
import { limitsOfPoint } from './point-page';
import { instrumentChoices, type SurveyChoices } from './survey-choices';

/** The first stage of a survey: the point's facts, and what the survey itself states. */
export interface SurveyPoint {
	survey: SurveyRow;
	pointId: string;
	facts: PointFacts;
	limitSetTitle: string | null;
	ratioClass: string | null;
	pointUpdatedAt: string;
	/** The survey's own instrument is among them, also when it is archived. */
	instruments: SurveyChoices['instruments'];
}

export async function loadSurveyPoint(db: Db, scope: Scope, surveyId: string): Promise<SurveyPoint | null> {
	const surveys = db('surveys').where({ practice_id: scope.practiceId, id: surveyId });
	const survey = await (
		scope.clientId === undefined ? surveys : surveys.andWhere({ client_id: scope.clientId })
	).first();
	if (!survey) return null;
	const row = await db('points').where({ practice_id: scope.practiceId, id: survey.point_id }).first();
	if (!row) throw new Error('a survey stands at a point that has no row');
	const instruments = await instrumentChoices(db, scope);
	const own = survey.instrument_id;
	if (own !== null && !instruments.some((instrument) => instrument.id === own)) {
		const archived = await db('instruments').where({ practice_id: scope.practiceId, id: own }).first();
		if (archived)
			instruments.push({
				id: own,
				name: `${archived.name} (archived)`,
				serialNumber: archived.serial_number,
				dueOn: null
			});
	}
	const facts = toPointFacts(row);
	return {
		survey,
		pointId: row.id,
		facts,
		...(await limitsOfPoint(db, scope, facts)),
		pointUpdatedAt: row.updated_at,
		instruments
	};
}
