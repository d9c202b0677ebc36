import type { Evidence, Verdict } from '../../assessment/assessment';
import type { RevisionStatus } from '../../report/revision-status';
import type { Db } from '../db/database';
import type { ClientScope } from '../repositories/acknowledgements.repository';

export interface SiteHistoryEntry {
	revisionId: string;
	number: string;
	revision: string;
	status: RevisionStatus;
	issuedAt: string;
	pointName: string;
	verdict: Verdict;
	evidence: Evidence;
	advisory: boolean;
	/** Worst utilisation found, value ÷ limit; null when nothing was assessed. */
	worstUtilisation: number | null;
	acknowledged: boolean;
}

export interface PortalSite {
	id: string;
	name: string;
	address: string;
	timeZone: string;
	openActions: number;
	history: SiteHistoryEntry[];
}

/** The organisation's sites, each with what was issued for it over the years, newest first. */
export async function portalSites(db: Db, scope: ClientScope, siteId?: string): Promise<PortalSite[]> {
	const own = { practice_id: scope.practiceId, client_id: scope.clientId };
	const query = db('sites').where(own).whereNull('archived_at').orderBy('name');
	if (siteId !== undefined) void query.where({ id: siteId });
	const sites = await query;
	const history = await db('report_revisions as v')
		.join('reports as r', 'r.id', 'v.report_id')
		.join('surveys as s', 's.id', 'r.survey_id')
		.join('points as p', 'p.id', 's.point_id')
		.join('assessments as a', 'a.id', 'v.assessment_id')
		.where({ 'v.practice_id': scope.practiceId, 'v.client_id': scope.clientId })
		.whereIn('v.status', ['issued', 'superseded', 'withdrawn'])
		.orderBy('v.issued_at', 'desc')
		.select<(SiteHistoryEntry & { siteId: string; assessmentId: string })[]>({
			siteId: 'r.site_id',
			assessmentId: 'a.id',
			revisionId: 'v.id',
			number: 'r.number',
			revision: 'v.revision',
			status: 'v.status',
			issuedAt: 'v.issued_at',
			pointName: 'p.name',
			verdict: 'a.verdict',
			evidence: 'a.evidence',
			advisory: 'a.advisory'
		});
	const worst = await db('verdict_rows')
		.whereIn(
			'assessment_id',
			history.map((entry) => entry.assessmentId)
		)
		.andWhere({ practice_id: scope.practiceId })
		.groupBy('assessment_id')
		.select('assessment_id')
		.max({ utilisation: 'utilisation' });
	const acknowledged = new Set(
		(await db('acknowledgements').where(own).distinct('revision_id')).map(
			(row: { revision_id: string }) => row.revision_id
		)
	);
	const open: { site_id: string; n: number }[] = await db('actions')
		.where({ ...own, status: 'open', side: 'client' })
		.whereNotNull('published_at')
		.groupBy('site_id')
		.select('site_id')
		.count({ n: '*' });
	return sites.map((site) => ({
		id: site.id,
		name: site.name,
		address: site.address,
		timeZone: site.time_zone,
		openActions: open.find((row) => row.site_id === site.id)?.n ?? 0,
		history: history
			.filter((entry) => entry.siteId === site.id)
			.map(({ siteId: _site, assessmentId, ...entry }) => ({
				...entry,
				advisory: Boolean(entry.advisory),
				worstUtilisation: worst.find((row) => row.assessment_id === assessmentId)?.utilisation ?? null,
				acknowledged: acknowledged.has(entry.revisionId)
			}))
	}));
}
