import type { Db } from '../db/database';
import type { SiteRow } from '../db/rows';
import type { PointFacts } from '../../register/point-facts';
import { pointGaps, type PointGap } from '../../register/point-gaps';
import { toPointFacts } from '../repositories/point-mapping';
import type { Scope } from '../repositories/scope';
import { surveyLines, type SurveyLine } from './client-page';

export interface SiteHead extends SiteRow {
	client: { id: string; name: string };
}

export interface PointLine {
	id: string;
	facts: PointFacts;
	gaps: PointGap[];
	archivedAt: string | null;
}

export interface SitePage {
	site: SiteHead;
	points: PointLine[];
	surveys: SurveyLine[];
}

/** A site under the client its address names; null when either is not of this practice. */
export async function loadSiteHead(
	db: Db,
	scope: Scope,
	clientId: string,
	siteId: string
): Promise<SiteHead | null> {
	if (scope.clientId !== undefined && scope.clientId !== clientId) return null;
	const site = await db('sites')
		.where({ practice_id: scope.practiceId, client_id: clientId, id: siteId })
		.first();
	const client = await db('clients')
		.where({ practice_id: scope.practiceId, id: clientId })
		.first('id', 'name');
	return site && client ? { ...site, client } : null;
}

export async function loadSitePage(
	db: Db,
	scope: Scope,
	clientId: string,
	siteId: string
): Promise<SitePage | null> {
	const site = await loadSiteHead(db, scope, clientId, siteId);
	if (!site) return null;
	const points = await db('points')
		.where({ practice_id: scope.practiceId, site_id: siteId })
		.orderByRaw('archived_at is not null, name collate nocase');
	return {
		site,
		points: points.map((row) => {
			const facts = toPointFacts(row);
			return { id: row.id, facts, gaps: pointGaps(facts), archivedAt: row.archived_at };
		}),
		surveys: await surveyLines(db, scope, { 'v.site_id': siteId })
	};
}
