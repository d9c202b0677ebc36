import type { PointFacts } from '../../register/point-facts';
import type { Db } from '../db/database';
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
	archivedAt: string | null;
	updatedAt: string;
	surveys: SurveyLine[];
}

export async function limitSetTitle(db: Db, scope: Scope, limitSetId: number | null): Promise<string | null> {
	if (limitSetId === null) return null;
	const row = await db('limit_sets')
		.where({ id: limitSetId })
		.andWhere((either) => either.whereNull('practice_id').orWhere('practice_id', scope.practiceId))
		.first('standard', 'edition');
	return row ? `${row.standard}, ${row.edition}` : null;
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
	return {
		id: row.id,
		site,
		facts: toPointFacts(row),
		limitSetTitle: await limitSetTitle(db, scope, row.limit_set_id),
		archivedAt: row.archived_at,
		updatedAt: row.updated_at,
		surveys: await surveyLines(db, scope, { 'v.point_id': row.id })
	};
}
