import type { Evidence, Verdict } from '../../assessment/assessment';
import type { RevisionStatus } from '../../report/revision-status';
import type { Db } from '../db/database';
import type { ReportRevisionRow, ReportRow } from '../db/rows';
import { reportsRepository } from '../repositories/reports.repository';
import type { Scope } from '../repositories/scope';

export interface RevisionItem {
	id: string;
	revision: string;
	status: RevisionStatus;
	reason: string;
	preparedBy: string;
	preparedById: string;
	checkedBy: string | null;
	checkNote: string;
	sentForCheckAt: string | null;
	returnedAt: string | null;
	issuedAt: string | null;
	withdrawnAt: string | null;
	withdrawnReason: string | null;
	pdfSha256: string | null;
	pdfPages: number | null;
	pdfSize_bytes: number | null;
	acknowledgements: { name: string; typedName: string; at: string }[];
}

export interface ReportPage {
	report: { id: string; number: string | null; title: string } | null;
	/** Oldest first. */
	revisions: RevisionItem[];
	/** The newest one, with what is edited. */
	current:
		| (RevisionItem & {
				summary: string;
				findings: string[];
				edition: number;
				assessmentId: string;
				updatedAt: string;
		  })
		| null;
	currentAssessmentId: string | null;
	currentVerdict: { verdict: Verdict; evidence: Evidence; advisory: boolean } | null;
	/** Job that makes the preview or issues the report now. */
	working: { jobId: string; kind: 'render-report' | 'issue-report' } | null;
	/** Why the last preview or issue did not come to its end. */
	lastProblem: string | null;
}

async function revisionItems(
	db: Db,
	scope: Scope,
	rows: readonly ReportRevisionRow[]
): Promise<RevisionItem[]> {
	const people = [
		...new Set(rows.flatMap((row) => [row.prepared_by, ...(row.checked_by === null ? [] : [row.checked_by])]))
	];
	const names = new Map(
		(await db('users').whereIn('id', people).select('id', 'name')).map((row) => [row.id, row.name])
	);
	const hashes = rows.flatMap((row) => row.pdf_sha256 ?? []);
	const sizes = new Map(
		(await db('stored_files').whereIn('sha256', hashes)).map((file) => [file.sha256, Number(file.size_bytes)])
	);
	const acknowledgements = await db('acknowledgements as k')
		.join('users as u', 'u.id', 'k.user_id')
		.where('k.practice_id', scope.practiceId)
		.whereIn(
			'k.revision_id',
			rows.map((row) => row.id)
		)
		.orderBy('k.acknowledged_at')
		.select<{ revision_id: string; name: string; typedName: string; at: string }[]>({
			revision_id: 'k.revision_id',
			name: 'u.name',
			typedName: 'k.typed_name',
			at: 'k.acknowledged_at'
		});
	return rows.map((row) => ({
		id: row.id,
		revision: row.revision,
		status: row.status,
		reason: row.reason,
		preparedBy: names.get(row.prepared_by) ?? '',
		preparedById: row.prepared_by,
		checkedBy: row.checked_by === null ? null : (names.get(row.checked_by) ?? null),
		checkNote: row.check_note,
		sentForCheckAt: row.sent_for_check_at,
		returnedAt: row.returned_at,
		issuedAt: row.issued_at,
		withdrawnAt: row.withdrawn_at,
		withdrawnReason: row.withdrawn_reason,
		pdfSha256: row.pdf_sha256,
		pdfPages: row.pdf_pages,
		pdfSize_bytes: row.pdf_sha256 === null ? null : (sizes.get(row.pdf_sha256) ?? null),
		acknowledgements: acknowledgements
			.filter((one) => one.revision_id === row.id)
			.map(({ name, typedName, at }) => ({ name, typedName, at }))
	}));
}

async function jobsOf(
	db: Db,
	scope: Scope,
	revisionId: string
): Promise<Pick<ReportPage, 'working' | 'lastProblem'>> {
	const row = await db('jobs')
		.where('practice_id', scope.practiceId)
		.whereIn('kind', ['render-report', 'issue-report'])
		.whereRaw("json_extract(payload_json, '$.revisionId') = ?", [revisionId])
		.orderBy('created_at', 'desc')
		.first();
	if (!row) return { working: null, lastProblem: null };
	const active = row.status === 'queued' || row.status === 'running';
	return {
		working: active
			? { jobId: row.id, kind: row.kind === 'issue-report' ? 'issue-report' : 'render-report' }
			: null,
		lastProblem: row.status === 'failed' ? row.problem : null
	};
}

/** The report stage of a survey; `report` is null until a draft is made. */
export async function loadReportPage(db: Db, scope: Scope, surveyId: string): Promise<ReportPage> {
	const reports = reportsRepository(db, scope);
	const report: ReportRow | undefined = await reports.ofSurvey(surveyId);
	const assessment = await db('assessments')
		.where({ practice_id: scope.practiceId, survey_id: surveyId, is_current: 1 })
		.first('id', 'verdict', 'evidence', 'advisory');
	const base = {
		currentAssessmentId: assessment?.id ?? null,
		currentVerdict: assessment
			? { verdict: assessment.verdict, evidence: assessment.evidence, advisory: assessment.advisory === 1 }
			: null
	};
	if (report === undefined)
		return { report: null, revisions: [], current: null, working: null, lastProblem: null, ...base };
	const rows = await reports.revisionsOf(report.id);
	const items = await revisionItems(db, scope, rows);
	const newest = rows.at(-1);
	const item = items.at(-1);
	return {
		report: { id: report.id, number: report.number, title: report.title },
		revisions: items,
		current:
			newest && item
				? {
						...item,
						summary: newest.summary,
						findings: JSON.parse(newest.findings_json) as string[],
						edition: newest.edition,
						assessmentId: newest.assessment_id,
						updatedAt: newest.updated_at
					}
				: null,
		...(newest ? await jobsOf(db, scope, newest.id) : { working: null, lastProblem: null }),
		...base
	};
}
