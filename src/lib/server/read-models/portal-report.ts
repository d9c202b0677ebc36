import type { ClientScope } from '../repositories/acknowledgements.repository';
import type { Db } from '../db/database';
import type { ActionRow, ReportRevisionRow } from '../db/rows';
import { queryThreads, type QueryThread } from './query-threads';

export interface PortalReport {
	revision: Pick<
		ReportRevisionRow,
		| 'id'
		| 'revision'
		| 'status'
		| 'issued_at'
		| 'withdrawn_at'
		| 'withdrawn_reason'
		| 'model_json'
		| 'pdf_sha256'
		| 'pdf_pages'
	> & { reason: string };
	number: string;
	title: string;
	siteId: string;
	surveyId: string;
	siteName: string;
	siteTimeZone: string;
	practiceName: string;
	pdfSize_bytes: number | null;
	/** The revision that stands now, when it is another one. */
	current: { id: string; revision: string } | null;
	acknowledgements: { name: string; typedName: string; at: string; pdfSha256: string; userId: string }[];
	actions: Pick<
		ActionRow,
		'id' | 'title' | 'detail' | 'side' | 'responsible' | 'due_on' | 'status' | 'priority'
	>[];
	threads: QueryThread[];
}

/** One issued revision with all that its page shows; null for another organisation's, or for a draft. */
export async function portalReport(
	db: Db,
	scope: ClientScope,
	revisionId: string
): Promise<PortalReport | null> {
	const own = { practice_id: scope.practiceId, client_id: scope.clientId };
	const revision = await db('report_revisions')
		.where({ id: revisionId, ...own })
		.whereIn('status', ['issued', 'superseded', 'withdrawn'])
		.first();
	if (!revision) return null;
	const report = await db('reports')
		.join('sites', 'sites.id', 'reports.site_id')
		.join('practices', 'practices.id', 'reports.practice_id')
		.where('reports.id', revision.report_id)
		.andWhere('reports.practice_id', scope.practiceId)
		.first<{
			number: string;
			title: string;
			survey_id: string;
			site_id: string;
			site: string;
			zone: string;
			practice: string;
		}>(
			'reports.number',
			'reports.title',
			'reports.survey_id',
			'reports.site_id',
			'sites.name as site',
			'sites.time_zone as zone',
			'practices.name as practice'
		);
	if (!report) return null;
	const standing = await db('report_revisions')
		.where({ report_id: revision.report_id, ...own, status: 'issued' })
		.whereNot({ id: revisionId })
		.first('id', 'revision');
	const file = revision.pdf_sha256
		? await db('stored_files').where({ sha256: revision.pdf_sha256 }).first('size_bytes')
		: undefined;
	const acknowledgements = await db('acknowledgements as k')
		.join('users as u', 'u.id', 'k.user_id')
		.where({ 'k.revision_id': revisionId, 'k.practice_id': scope.practiceId, 'k.client_id': scope.clientId })
		.orderBy('k.acknowledged_at')
		.select<PortalReport['acknowledgements']>({
			name: 'u.name',
			typedName: 'k.typed_name',
			at: 'k.acknowledged_at',
			pdfSha256: 'k.pdf_sha256',
			userId: 'k.user_id'
		});
	const actions = await db('actions')
		.where({ survey_id: report.survey_id, ...own })
		.whereNotNull('published_at')
		.orderBy('position')
		.select('id', 'title', 'detail', 'side', 'responsible', 'due_on', 'status', 'priority');
	return {
		revision,
		number: report.number,
		title: report.title,
		siteId: report.site_id,
		surveyId: report.survey_id,
		siteName: report.site,
		siteTimeZone: report.zone,
		practiceName: report.practice,
		pdfSize_bytes: file?.size_bytes ?? null,
		current: standing ?? null,
		acknowledgements,
		actions,
		threads: await queryThreads(db, { practiceId: scope.practiceId, clientId: scope.clientId, revisionId })
	};
}
