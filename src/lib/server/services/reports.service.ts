import { can, type Actor } from '../../access/access';
import { formatPhase } from '../../recording/phase';
import { nextRevision, isVisibleToClient } from '../../report/revision-status';
import { suggestFindings } from '../../report/suggest-findings';
import { suggestSummary } from '../../report/suggest-summary';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requireClientId, requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import { issueReport } from '../jobs/issue-report.job';
import { renderReport } from '../jobs/render-report.job';
import { reportWithdrawnMail } from '../mail/templates/report-mails';
import { loadReportPage } from '../read-models/report-page';
import { assessmentsRepository, type StoredAssessment } from '../repositories/assessments.repository';
import { toPointFacts } from '../repositories/point-mapping';
import { pointsRepository } from '../repositories/points.repository';
import { reportsRepository } from '../repositories/reports.repository';
import { scopeOf } from '../repositories/scope';
import { surveysRepository } from '../repositories/surveys.repository';
import type { ServiceDeps } from '../service-deps';
import { draftModel, loadSubject, type RevisionSubject } from './reports/issue-revision';
import { modelSha256 } from './reports/gather-report';
import { clientRecipients } from './reports/recipients';
import { requireChecker, requireEditable, requireInCheck, whyNotChecker } from './reports/revision-rules';
import { isUpToDate, NOT_UP_TO_DATE } from './reports/up-to-date';

export interface DraftText {
	/** Edition that the person started from. */
	edition: number;
	title: string;
	summary: string;
	findings: string[];
}

export interface StoredPdf {
	sha256: string;
	size_bytes: number;
	fileName: string;
	/** Issued ones never change; drafts do. */
	issued: boolean;
}

const EDITED_ELSEWHERE =
	'Somebody else saved this draft in the meantime. Your text is kept here: compare it with the saved one, then save again.';

/** Reports: drafted, checked by another person, issued, superseded, withdrawn. */
export function createReportsService(deps: ServiceDeps) {
	const { db, blobs, clock, jobs, mail, config } = deps;

	async function subjectOf(trx: Db, actor: Actor, revisionId: string): Promise<RevisionSubject> {
		return requireFound(await loadSubject(trx, scopeOf(actor), revisionId), 'report');
	}

	async function audit(
		trx: Db,
		actor: Actor,
		action: string,
		id: string,
		detail: Record<string, unknown> = {}
	) {
		await appendAudit(trx, actor, { action, subjectKind: 'report-revision', subjectId: id, detail }, clock());
	}

	async function allowsSelfCheck(trx: Db, actor: Actor): Promise<boolean> {
		return (
			(await trx('practices').where({ id: actor.practiceId }).first('allow_self_check'))?.allow_self_check ===
			1
		);
	}

	async function currentAssessment(trx: Db, actor: Actor, surveyId: string): Promise<StoredAssessment> {
		const stored = await assessmentsRepository(trx, scopeOf(actor)).currentOf(surveyId);
		if (stored === null)
			throw new AppError('conflict', 'There is no verdict to report yet. Assess the survey first.');
		return stored;
	}

	/** First wording of a draft, from the verdict; the engineer edits it. */
	async function firstWords(trx: Db, actor: Actor, pointId: string, stored: StoredAssessment) {
		const point = requireFound(await pointsRepository(trx, scopeOf(actor)).byId(pointId), 'point');
		const { phaseNames } = toPointFacts(point);
		const { assessment } = stored;
		return {
			summary: suggestSummary(assessment),
			findings: suggestFindings(assessment, (phase) => formatPhase(phase, phaseNames))
		};
	}

	/** The draft of a survey's report: made when there is none, found when there is. */
	async function createDraft(actor: Actor, surveyId: string): Promise<string> {
		requirePermission(actor, 'report.draft');
		const at = clock().toISOString();
		return withTransaction(db, async (trx) => {
			const scope = scopeOf(actor);
			const survey = requireFound(await surveysRepository(trx, scope).byId(surveyId), 'survey');
			const reports = reportsRepository(trx, scope);
			const known = await reports.ofSurvey(surveyId);
			const newest = known && (await reports.revisionsOf(known.id)).at(-1);
			if (newest) return newest.id;
			const stored = await currentAssessment(trx, actor, surveyId);
			const words = await firstWords(trx, actor, survey.point_id, stored);
			const reportId =
				known?.id ?? (await reports.add(survey, 'Harmonic compliance report', actor.userId, at));
			const id = await reports.addRevision(
				{
					client_id: survey.client_id,
					report_id: reportId,
					revision: 'A',
					assessment_id: stored.row.id,
					reason: 'First issue',
					summary: words.summary,
					findings_json: JSON.stringify(words.findings),
					prepared_by: actor.userId
				},
				at
			);
			await audit(trx, actor, 'report.drafted', id, { surveyId });
			return id;
		});
	}

	/** Saves a draft. Throws `conflict` when somebody else saved since `edition`; nothing is overwritten unseen. */
	async function save(actor: Actor, revisionId: string, text: DraftText): Promise<{ edition: number }> {
		requirePermission(actor, 'report.draft');
		return withTransaction(db, async (trx) => {
			const { revision, report } = await subjectOf(trx, actor, revisionId);
			requireEditable(revision);
			if (revision.edition !== text.edition) throw new AppError('conflict', EDITED_ELSEWHERE);
			const edition = revision.edition + 1;
			const reports = reportsRepository(trx, scopeOf(actor));
			await reports.setTitle(report.id, text.title);
			await reports.change(revisionId, {
				summary: text.summary,
				findings_json: JSON.stringify(text.findings),
				prepared_by: actor.userId,
				edition,
				updated_at: clock().toISOString()
			});
			await audit(trx, actor, 'report.saved', revisionId, { edition });
			return { edition };
		});
	}

	/** Lets a draft rest on the survey's current verdict; its words stay. */
	async function useCurrentVerdict(actor: Actor, revisionId: string): Promise<void> {
		requirePermission(actor, 'report.draft');
		await withTransaction(db, async (trx) => {
			const { revision, survey } = await subjectOf(trx, actor, revisionId);
			requireEditable(revision);
			const stored = await currentAssessment(trx, actor, survey.id);
			await reportsRepository(trx, scopeOf(actor)).change(revisionId, {
				assessment_id: stored.row.id,
				edition: revision.edition + 1,
				updated_at: clock().toISOString()
			});
			await audit(trx, actor, 'report.verdict-taken-over', revisionId, { assessmentId: stored.row.id });
		});
	}

	async function sendForCheck(actor: Actor, revisionId: string): Promise<void> {
		requirePermission(actor, 'report.draft');
		await withTransaction(db, async (trx) => {
			const subject = await subjectOf(trx, actor, revisionId);
			requireEditable(subject.revision);
			if (!(await isUpToDate(trx, scopeOf(actor), subject))) throw new AppError('conflict', NOT_UP_TO_DATE);
			if (subject.revision.summary.trim() === '')
				throw new AppError('conflict', 'Write the summary first: it is what the client reads.');
			const at = clock().toISOString();
			await reportsRepository(trx, scopeOf(actor)).change(revisionId, {
				status: 'in-check',
				prepared_by: actor.userId,
				sent_for_check_at: at,
				check_note: '',
				updated_at: at
			});
			await audit(trx, actor, 'report.sent-for-check', revisionId, { edition: subject.revision.edition });
		});
	}

	async function returnToAuthor(actor: Actor, revisionId: string, note: string): Promise<void> {
		requirePermission(actor, 'report.check');
		if (note.trim() === '') throw new AppError('invalid', 'Say what has to be changed.');
		await withTransaction(db, async (trx) => {
			const { revision } = await subjectOf(trx, actor, revisionId);
			requireInCheck(revision);
			const at = clock().toISOString();
			await reportsRepository(trx, scopeOf(actor)).change(revisionId, {
				status: 'returned',
				checked_by: actor.userId,
				check_note: note.trim(),
				returned_at: at,
				edition: revision.edition + 1,
				updated_at: at
			});
			await audit(trx, actor, 'report.returned', revisionId, { note: note.trim() });
		});
	}

	/** Starts the issue in the worker. The rules are checked here, and again when the worker freezes it. */
	async function issue(actor: Actor, revisionId: string): Promise<string> {
		requirePermission(actor, 'report.check');
		return withTransaction(db, async (trx) => {
			const subject = await subjectOf(trx, actor, revisionId);
			requireInCheck(subject.revision);
			requireChecker(actor, subject.revision, await allowsSelfCheck(trx, actor));
			if (!(await isUpToDate(trx, scopeOf(actor), subject))) throw new AppError('conflict', NOT_UP_TO_DATE);
			const jobId = await jobs.enqueue(
				trx,
				issueReport,
				{
					revisionId,
					edition: subject.revision.edition,
					checker: { userId: actor.userId, name: actor.name }
				},
				{ practiceId: actor.practiceId, dedupeKey: `issue-report:${revisionId}` }
			);
			await audit(trx, actor, 'report.issue-started', revisionId, { edition: subject.revision.edition });
			return jobId;
		});
	}

	async function preview(actor: Actor, revisionId: string): Promise<string> {
		requirePermission(actor, 'report.read');
		return withTransaction(db, async (trx) => {
			const { revision } = await subjectOf(trx, actor, revisionId);
			if (revision.issued_at !== null)
				throw new AppError('conflict', 'This revision is issued: open its PDF.');
			return jobs.enqueue(
				trx,
				renderReport,
				{ revisionId },
				{ practiceId: actor.practiceId, dedupeKey: `render-report:${revisionId}` }
			);
		});
	}

	/** A new draft that corrects an issued or withdrawn revision, from the survey's current verdict. */
	async function startRevision(actor: Actor, revisionId: string, reason: string): Promise<string> {
		requirePermission(actor, 'report.draft');
		if (reason.trim() === '')
			throw new AppError('invalid', 'Say why a new revision is needed: the report prints it.');
		return withTransaction(db, async (trx) => {
			const { revision, report, survey } = await subjectOf(trx, actor, revisionId);
			const reports = reportsRepository(trx, scopeOf(actor));
			const newest = (await reports.revisionsOf(report.id)).at(-1);
			if (newest?.id !== revision.id || revision.issued_at === null)
				throw new AppError('conflict', 'A later revision exists already. Load the page again.');
			const stored = await currentAssessment(trx, actor, survey.id);
			const id = await reports.addRevision(
				{
					client_id: revision.client_id,
					report_id: report.id,
					revision: nextRevision(revision.revision),
					assessment_id: stored.row.id,
					reason: reason.trim(),
					summary: revision.summary,
					findings_json: revision.findings_json,
					prepared_by: actor.userId
				},
				clock().toISOString()
			);
			await audit(trx, actor, 'report.revision-started', id, { of: revisionId, reason: reason.trim() });
			return id;
		});
	}

	/** Takes an issued revision back: it stays readable, marked, with the reason; the client is told. */
	async function withdraw(actor: Actor, revisionId: string, reason: string): Promise<void> {
		requirePermission(actor, 'report.check');
		if (reason.trim() === '')
			throw new AppError('invalid', 'Say why the report is withdrawn: the client reads it.');
		await withTransaction(db, async (trx) => {
			const scope = scopeOf(actor);
			const { revision, report, survey } = await subjectOf(trx, actor, revisionId);
			if (revision.status !== 'issued')
				throw new AppError('conflict', 'Only a revision that stands can be withdrawn.');
			const at = clock().toISOString();
			await reportsRepository(trx, scope).change(revisionId, {
				status: 'withdrawn',
				withdrawn_at: at,
				withdrawn_reason: reason.trim(),
				updated_at: at
			});
			const site = await trx('sites')
				.where({ practice_id: actor.practiceId, id: survey.site_id })
				.first('name');
			for (const person of await clientRecipients(trx, scope, revision.client_id))
				await mail.queue(trx, {
					template: 'report-withdrawn',
					practiceId: actor.practiceId,
					toEmail: person.email,
					toName: person.name,
					...reportWithdrawnMail({
						name: person.name,
						practiceName: actor.practiceName,
						siteName: site?.name ?? '',
						reportNumber: report.number ?? '',
						revision: revision.revision,
						reason: reason.trim(),
						href: `${config.origin}/portal/reports`
					})
				});
			await audit(trx, actor, 'report.withdrawn', revisionId, { reason: reason.trim() });
		});
	}

	/** The report stage with what this person may do now, and whom an issue would tell. */
	async function page(actor: Actor, surveyId: string) {
		requirePermission(actor, 'report.read');
		const scope = scopeOf(actor);
		const survey = requireFound(await surveysRepository(db, scope).byId(surveyId), 'survey');
		const shown = await loadReportPage(db, scope, surveyId);
		const subject = shown.current && (await loadSubject(db, scope, shown.current.id));
		const mayCheck = can(actor, 'report.check');
		const draft = subject !== null && subject.revision.issued_at === null;
		const upToDate = subject !== null && (await isUpToDate(db, scope, subject));
		const previewCurrent =
			draft && subject.revision.pdf_sha256 !== null
				? modelSha256(await draftModel(deps, scope, subject)) === subject.revision.model_sha256
				: false;
		return {
			...shown,
			recipients: await clientRecipients(db, scope, survey.client_id),
			upToDate,
			previewCurrent,
			mayCheck,
			whyNotIssue: !mayCheck
				? 'Issuing needs the right to check. Ask a checker of your practice.'
				: subject && whyNotChecker(actor, subject.revision, await allowsSelfCheck(db, actor)),
			selfCheck: subject !== null && subject.revision.prepared_by === actor.userId
		};
	}

	/** PDF of a revision: consultants see drafts, clients only what was issued to their own organisation. */
	async function pdf(actor: Actor, revisionId: string): Promise<StoredPdf> {
		if (actor.role === 'client') {
			requirePermission(actor, 'portal.read');
			requireClientId(actor);
		} else requirePermission(actor, 'report.read');
		const { report, revision } = await subjectOf(db, actor, revisionId);
		if (actor.role === 'client' && !isVisibleToClient(revision.status)) requireFound(null, 'report');
		const sha256 = requireFound(revision.pdf_sha256, 'PDF');
		const file = requireFound(await db('stored_files').where({ sha256 }).first(), 'PDF');
		const name = report.number ?? 'draft';
		return {
			sha256,
			size_bytes: Number(file.size_bytes),
			fileName: `${name} rev ${revision.revision}${revision.issued_at === null ? ' DRAFT' : ''}.pdf`,
			issued: revision.issued_at !== null
		};
	}

	return {
		createDraft,
		save,
		useCurrentVerdict,
		sendForCheck,
		returnToAuthor,
		issue,
		preview,
		startRevision,
		withdraw,
		page,
		pdf,
		/** Bytes of a PDF that `pdf` has allowed. */
		openPdf: (file: StoredPdf) => blobs.openRead(file.sha256)
	};
}

export type ReportsService = ReturnType<typeof createReportsService>;
