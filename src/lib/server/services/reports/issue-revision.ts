import type { ReportModel } from '../../../report/report-model';
import { canonicalJson } from '../../../report/measured-data';
import { appendAudit } from '../../audit/audit-log';
import { withTransaction, type Db } from '../../db/database';
import type { ReportRevisionRow, ReportRow, SurveyRow } from '../../db/rows';
import { reportIssuedMail } from '../../mail/templates/report-mails';
import { JobFailed } from '../../jobs/job-definition';
import { actionsRepository } from '../../repositories/actions.repository';
import { numberSequencesRepository } from '../../repositories/number-sequences.repository';
import { reportsRepository } from '../../repositories/reports.repository';
import type { Scope } from '../../repositories/scope';
import { storedFilesRepository } from '../../repositories/stored-files.repository';
import { surveysRepository } from '../../repositories/surveys.repository';
import type { ServiceDeps } from '../../service-deps';
import type { StoredBlob } from '../../storage/blob-store';
import { gatherReport, modelSha256, type Standing } from './gather-report';
import { makePdf } from './make-pdf';
import { clientRecipients } from './recipients';
import { isUpToDate, NOT_UP_TO_DATE } from './up-to-date';

export interface IssueOrder {
	revisionId: string;
	edition: number;
	checker: { userId: string; name: string };
}

export interface RevisionSubject {
	report: ReportRow;
	revision: ReportRevisionRow;
	survey: SurveyRow;
}

const NO_LONGER =
	'The report changed while it was being issued. Look at it again, and issue it if it still stands.';

export async function loadSubject(db: Db, scope: Scope, revisionId: string): Promise<RevisionSubject | null> {
	const reports = reportsRepository(db, scope);
	const revision = await reports.revision(revisionId);
	const report = revision && (await reports.byId(revision.report_id));
	const survey = report && (await surveysRepository(db, scope).byId(report.survey_id));
	return revision && report && survey ? { report, revision, survey } : null;
}

/** "TH-2026-0142": prefix of the practice, year of the first issue in its own zone, count within the year. */
export function formatReportNumber(prefix: string, year: string, count: number): string {
	return `${prefix}-${year}-${String(count).padStart(4, '0')}`;
}

/** The report's number, given once, at its first issue; a retry finds it given. */
async function numberFor(db: Db, scope: Scope, report: ReportRow, now: Date): Promise<string> {
	return withTransaction(db, async (trx) => {
		const reports = reportsRepository(trx, scope);
		const known = (await reports.byId(report.id))?.number;
		if (known) return known;
		const practice = await trx('practices').where({ id: scope.practiceId }).first();
		if (!practice) throw new Error('the acting practice has no row');
		const year = new Intl.DateTimeFormat('en', { year: 'numeric', timeZone: practice.time_zone }).format(now);
		const count = await numberSequencesRepository(trx, scope).next(`report:${year}`);
		const number = formatReportNumber(practice.report_prefix, year, count);
		await reports.setNumber(report.id, number);
		return number;
	});
}

function stillStands(
	revision: ReportRevisionRow | undefined,
	order: IssueOrder
): revision is ReportRevisionRow {
	return revision?.status === 'in-check' && revision.edition === order.edition;
}

async function mailClient(
	deps: Pick<ServiceDeps, 'mail' | 'config'>,
	trx: Db,
	scope: Scope,
	subject: RevisionSubject,
	model: ReportModel,
	supersedes: string | null
): Promise<number> {
	const people = await clientRecipients(trx, scope, subject.revision.client_id);
	for (const person of people) {
		const content = reportIssuedMail({
			name: person.name,
			practiceName: model.practice.name,
			clientName: model.client.name,
			siteName: model.site.name,
			title: model.document.title,
			reportNumber: model.document.number ?? '',
			revision: subject.revision.revision,
			verdictSentence: model.verdict.plainSentence,
			supersedes,
			href: `${deps.config.origin}/portal/reports/${subject.revision.id}`
		});
		await deps.mail.queue(trx, {
			template: 'report-issued',
			practiceId: scope.practiceId,
			toEmail: person.email,
			toName: person.name,
			...content
		});
	}
	return people.length;
}

async function freeze(
	trx: Db,
	scope: Scope,
	subject: RevisionSubject,
	order: IssueOrder,
	made: { model: ReportModel; blob: StoredBlob; pages: number; at: string }
): Promise<string | null> {
	const reports = reportsRepository(trx, scope);
	const { model, blob, pages, at } = made;
	const earlier = (await reports.revisionsOf(subject.report.id)).filter(
		(one) => one.status === 'issued' && one.id !== order.revisionId
	);
	for (const one of earlier) await reports.change(one.id, { status: 'superseded', updated_at: at });
	await storedFilesRepository(trx).record(blob, 'application/pdf', new Date(at));
	await reports.change(order.revisionId, {
		status: 'issued',
		checked_by: order.checker.userId,
		issued_at: at,
		model_json: canonicalJson(model),
		model_sha256: modelSha256(model),
		data_sha256: model.lineage.dataSha256,
		pdf_sha256: blob.sha256,
		pdf_pages: pages,
		updated_at: at
	});
	await actionsRepository(trx, scope).publish(subject.survey.id, at);
	return earlier.at(-1)?.revision ?? null;
}

/**
 * Issues a checked revision: model, PDF and blob first, then everything that the world sees in one transaction:
 * the revision stands, its predecessor does not, actions are published, mail is queued, history is written.
 */
export async function issueRevision(
	deps: ServiceDeps,
	scope: Scope,
	order: IssueOrder,
	progress: (done: number, total: number, text: string) => Promise<void>,
	finish: (trx: Db) => Promise<void>
): Promise<void> {
	const { db, blobs, clock } = deps;
	const subject = await loadSubject(db, scope, order.revisionId);
	if (!subject || !stillStands(subject.revision, order)) throw new JobFailed(NO_LONGER);
	if (!(await isUpToDate(db, scope, subject))) throw new JobFailed(NOT_UP_TO_DATE);
	const now = clock();
	const at = now.toISOString();
	const standing: Standing = {
		status: 'issued',
		number: await numberFor(db, scope, subject.report, now),
		checkedBy: order.checker.name,
		checkedById: order.checker.userId,
		issuedAt: at
	};
	const model = await gatherReport(db, blobs, scope, subject, standing);
	const pdf = await makePdf(model, progress);
	const blob = await blobs.put(pdf.bytes);
	await withTransaction(db, async (trx) => {
		if (!stillStands(await reportsRepository(trx, scope).revision(order.revisionId), order))
			throw new JobFailed(NO_LONGER);
		const supersedes = await freeze(trx, scope, subject, order, { model, blob, pages: pdf.pages, at });
		const mails = await mailClient(deps, trx, scope, subject, model, supersedes);
		await appendAudit(
			trx,
			{ ...order.checker, practiceId: scope.practiceId },
			{
				action: 'report.issued',
				subjectKind: 'report-revision',
				subjectId: order.revisionId,
				detail: {
					number: model.document.number,
					revision: subject.revision.revision,
					pdfSha256: blob.sha256,
					dataSha256: model.lineage.dataSha256,
					selfChecked: model.document.selfChecked,
					supersedes,
					mails
				}
			},
			now
		);
		await finish(trx);
	});
}

/** The PDF of a draft as it would print now. Made anew only when the model has changed since the last one. */
export async function renderDraft(
	deps: ServiceDeps,
	scope: Scope,
	revisionId: string,
	progress: (done: number, total: number, text: string) => Promise<void>,
	finish: (trx: Db) => Promise<void>
): Promise<void> {
	const { db, blobs, clock } = deps;
	const subject = await loadSubject(db, scope, revisionId);
	if (!subject) throw new JobFailed('This report is no longer there.');
	const model = await draftModel(deps, scope, subject);
	const hash = modelSha256(model);
	if (subject.revision.model_sha256 === hash && subject.revision.pdf_sha256 !== null) {
		await withTransaction(db, finish);
		return;
	}
	const pdf = await makePdf(model, progress);
	const blob = await blobs.put(pdf.bytes);
	await withTransaction(db, async (trx) => {
		await storedFilesRepository(trx).record(blob, 'application/pdf', clock());
		const reports = reportsRepository(trx, scope);
		const revision = await reports.revision(revisionId);
		if (revision?.issued_at === null)
			await reports.change(revisionId, { model_sha256: hash, pdf_sha256: blob.sha256, pdf_pages: pdf.pages });
		await finish(trx);
	});
}

/** Model of a revision that is not issued: without number, without checker. */
export async function draftModel(
	{ db, blobs }: Pick<ServiceDeps, 'db' | 'blobs'>,
	scope: Scope,
	subject: RevisionSubject
): Promise<ReportModel> {
	return gatherReport(db, blobs, scope, subject, {
		status: subject.revision.status,
		number: subject.report.number,
		checkedBy: null,
		checkedById: null,
		issuedAt: null
	});
}
