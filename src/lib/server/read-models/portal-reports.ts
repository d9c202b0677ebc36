import type { RevisionStatus } from '../../report/revision-status';
import type { Verdict, Evidence } from '../../assessment/assessment';
import type { ClientScope } from '../repositories/acknowledgements.repository';
import type { Db } from '../db/database';

export interface PortalReportItem {
	revisionId: string;
	number: string;
	revision: string;
	title: string;
	status: RevisionStatus;
	siteName: string;
	pointName: string;
	siteTimeZone: string;
	issuedAt: string;
	verdict: Verdict;
	evidence: Evidence;
	advisory: boolean;
	acknowledgedAt: string | null;
	openQueries: number;
}

export interface PortalReportFilter {
	/** 'waiting': issued and not yet acknowledged by anybody of the organisation. */
	show: 'all' | 'waiting';
	siteId: string | null;
	page: number;
}

export const PORTAL_PAGE_SIZE = 20;

/** Whatever was issued to this organisation, newest first; drafts do not exist here. */
export async function portalReports(
	db: Db,
	scope: ClientScope,
	filter: PortalReportFilter
): Promise<{ items: PortalReportItem[]; total: number }> {
	const acknowledged = db('acknowledgements')
		.select('revision_id')
		.min('acknowledged_at as acknowledged_at')
		.groupBy('revision_id')
		.as('ack');
	const base = db('report_revisions as v')
		.join('reports as r', 'r.id', 'v.report_id')
		.join('surveys as s', 's.id', 'r.survey_id')
		.join('points as p', 'p.id', 's.point_id')
		.join('sites as t', 't.id', 'r.site_id')
		.join('assessments as a', 'a.id', 'v.assessment_id')
		.leftJoin(acknowledged, 'ack.revision_id', 'v.id')
		.where({ 'v.practice_id': scope.practiceId, 'v.client_id': scope.clientId })
		.whereIn('v.status', ['issued', 'superseded', 'withdrawn']);
	if (filter.siteId) void base.where('r.site_id', filter.siteId);
	if (filter.show === 'waiting') void base.where('v.status', 'issued').whereNull('ack.acknowledged_at');

	const counted: { n: number } | undefined = await base.clone().count<{ n: number }[]>('v.id as n').first();
	const rows: Record<string, never>[] = await base
		.clone()
		.select({
			revisionId: 'v.id',
			number: 'r.number',
			revision: 'v.revision',
			title: 'r.title',
			status: 'v.status',
			siteName: 't.name',
			pointName: 'p.name',
			siteTimeZone: 't.time_zone',
			issuedAt: 'v.issued_at',
			verdict: 'a.verdict',
			evidence: 'a.evidence',
			advisory: 'a.advisory',
			acknowledgedAt: 'ack.acknowledged_at'
		})
		.select(
			db('queries as q')
				.count('*')
				.whereRaw('q.revision_id = v.id')
				.whereNot('q.status', 'closed')
				.as('openQueries')
		)
		.orderBy([{ column: 'v.issued_at', order: 'desc' }, { column: 'v.id' }])
		.limit(PORTAL_PAGE_SIZE)
		.offset((filter.page - 1) * PORTAL_PAGE_SIZE);
	return {
		items: rows.map((row) => ({
			...(row as unknown as PortalReportItem),
			advisory: Boolean(row['advisory'])
		})),
		total: Number(counted?.n ?? 0)
	};
}
