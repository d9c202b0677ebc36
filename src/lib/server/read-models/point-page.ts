import { toAssessedPoint } from '../../register/assessed-point';
import { limitSetName } from '../../register/limit-set-suggestion';
import type { PointFacts } from '../../register/point-facts';
import { ratioClassLabel } from '../../register/ratio-class';
import type { Db } from '../db/database';
import { limitSetsRepository } from '../repositories/limit-sets.repository';
import { toPointFacts } from '../repositories/point-mapping';
import type { Scope } from '../repositories/scope';
import { surveyLines, type SurveyLine } from './client-page';
import { loadSiteHead, type SiteHead } from './site-page';

export interface PointPage {
	id: string;
	site: SiteHead;
	facts: PointFacts;
	/** Title of the limit set that applies; null when none is chosen. */
	limitSetTitle: string | null;
	/** Printed label of the limit class I_sc/I_L falls in; null where there is none. */
	ratioClass: string | null;
	archivedAt: string | null;
	updatedAt: string;
	surveys: SurveyLine[];
}

/** Title of the point's limit set, and the class of its current limits that I_sc/I_L falls in. */
export async function limitsOfPoint(
	db: Db,
	scope: Scope,
	facts: PointFacts
): Promise<{ limitSetTitle: string | null; ratioClass: string | null }> {
	if (facts.limitSetId === null) return { limitSetTitle: null, ratioClass: null };
	const limitSet = await limitSetsRepository(db, scope.practiceId).byId(facts.limitSetId);
	if (limitSet === null) return { limitSetTitle: null, ratioClass: null };
	const { demandCurrent_A, shortCircuitCurrent_A } = toAssessedPoint(facts);
	const known = demandCurrent_A !== null && shortCircuitCurrent_A !== null;
	return {
		limitSetTitle: limitSetName(limitSet),
		ratioClass: known
			? ratioClassLabel(limitSet, facts.nominalVoltage_V, shortCircuitCurrent_A / demandCurrent_A)
			: null
	};
}

/** A point under the client and site its address names; null when one of them does not fit. */
export async function loadPointPage(
	db: Db,
	scope: Scope,
	path: { clientId: string; siteId: string; pointId: string }
): Promise<PointPage | null> {
	const site = await loadSiteHead(db, scope, path.clientId, path.siteId);
	if (!site) return null;
	const row = await db('points')
		.where({ practice_id: scope.practiceId, site_id: site.id, id: path.pointId })
		.first();
	if (!row) return null;
	const facts = toPointFacts(row);
	return {
		id: row.id,
		site,
		facts,
		...(await limitsOfPoint(db, scope, facts)),
		archivedAt: row.archived_at,
		updatedAt: row.updated_at,
		surveys: await surveyLines(db, scope, { 'v.point_id': row.id })
	};
}
