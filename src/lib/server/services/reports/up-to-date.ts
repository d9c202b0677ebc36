import { toAssessedPoint } from '../../../register/assessed-point';
import { canonicalJson } from '../../../report/measured-data';
import type { Db } from '../../db/database';
import type { ReportRevisionRow, SurveyRow } from '../../db/rows';
import { assessmentsRepository } from '../../repositories/assessments.repository';
import { toPointFacts } from '../../repositories/point-mapping';
import { pointsRepository } from '../../repositories/points.repository';
import type { Scope } from '../../repositories/scope';

export const NOT_UP_TO_DATE =
	'The point, the captures or the verdict changed after this draft was made. Take over the current verdict first.';

/** Whether a draft rests on the survey's current assessment, and that one on the point as it stands. */
export async function isUpToDate(
	db: Db,
	scope: Scope,
	{ revision, survey }: { revision: ReportRevisionRow; survey: SurveyRow }
): Promise<boolean> {
	const current = await assessmentsRepository(db, scope).currentOf(survey.id);
	const point = await pointsRepository(db, scope).byId(survey.point_id);
	if (current === null || point === undefined || current.row.id !== revision.assessment_id) return false;
	const now = toAssessedPoint(toPointFacts(point));
	return canonicalJson(now) === canonicalJson(current.input.point);
}
