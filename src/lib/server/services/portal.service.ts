import type { Actor } from '../../access/access';
import { ACKNOWLEDGEMENT_STATEMENT } from '../../portal/acknowledgement';
import { formatMoment } from '../../report/dates';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requireClientId, requirePermission } from '../auth/require-permission';
import { withTransaction } from '../db/database';
import { acknowledgementReceiptMail } from '../mail/templates/report-mails';
import { portalActions } from '../read-models/portal-actions';
import { portalReport } from '../read-models/portal-report';
import { portalReports, type PortalReportFilter } from '../read-models/portal-reports';
import { portalSites } from '../read-models/portal-sites';
import { acknowledgementsRepository, type ClientScope } from '../repositories/acknowledgements.repository';
import type { ServiceDeps } from '../service-deps';

/** What a client organisation may do with what was issued to it. */
export function createPortalService({ db, mail, clock, config }: ServiceDeps) {
	function scopeOf(actor: Actor): ClientScope {
		return { practiceId: actor.practiceId, clientId: requireClientId(actor) };
	}

	async function reports(actor: Actor, filter: PortalReportFilter) {
		requirePermission(actor, 'portal.read');
		return portalReports(db, scopeOf(actor), filter);
	}

	async function report(actor: Actor, revisionId: string) {
		requirePermission(actor, 'portal.read');
		return requireFound(await portalReport(db, scopeOf(actor), revisionId), 'report');
	}

	async function sites(actor: Actor) {
		requirePermission(actor, 'portal.read');
		return portalSites(db, scopeOf(actor));
	}

	async function site(actor: Actor, siteId: string) {
		requirePermission(actor, 'portal.read');
		const [found] = await portalSites(db, scopeOf(actor), siteId);
		return requireFound(found, 'site');
	}

	async function actions(actor: Actor, filter: { status: 'open' | 'all' }) {
		requirePermission(actor, 'portal.read');
		return portalActions(db, scopeOf(actor), filter);
	}

	/**
	 * Records that this person has received the revision, with the hash of the very PDF. Repeating it returns the
	 * first: a second press is no second acknowledgement. Throws `conflict` when the revision no longer stands.
	 */
	async function acknowledge(actor: Actor, revisionId: string, typedName: string, requestId: string) {
		requirePermission(actor, 'portal.acknowledge');
		const scope = scopeOf(actor);
		return withTransaction(db, async (trx) => {
			const found = requireFound(await portalReport(trx, scope, revisionId), 'report');
			const acknowledgements = acknowledgementsRepository(trx, scope);
			const first = await acknowledgements.byPerson(revisionId, actor.userId);
			if (first) return first;
			if (found.revision.status !== 'issued' || found.revision.pdf_sha256 === null)
				throw new AppError(
					'conflict',
					found.current
						? `Revision ${found.revision.revision} has been replaced by revision ${found.current.revision}. Open that one and acknowledge it instead.`
						: 'This report has been withdrawn, so there is nothing to acknowledge.'
				);
			const now = clock();
			await acknowledgements.add({
				revisionId,
				userId: actor.userId,
				typedName,
				statement: ACKNOWLEDGEMENT_STATEMENT,
				pdfSha256: found.revision.pdf_sha256,
				acknowledgedAt: now.toISOString()
			});
			await appendAudit(
				trx,
				actor,
				{
					action: 'report.acknowledged',
					subjectKind: 'report-revision',
					subjectId: revisionId,
					detail: {
						number: found.number,
						revision: found.revision.revision,
						typedName,
						pdfSha256: found.revision.pdf_sha256
					}
				},
				now,
				requestId
			);
			const preparer = await trx('report_revisions')
				.join('users', 'users.id', 'report_revisions.prepared_by')
				.where('report_revisions.id', revisionId)
				.andWhere('report_revisions.practice_id', actor.practiceId)
				.first('users.email', 'users.name');
			const facts = {
				practiceName: actor.practiceName,
				reportNumber: found.number,
				revision: found.revision.revision,
				siteName: found.siteName,
				typedName,
				acknowledgedAt: `${formatMoment(now.toISOString(), found.siteTimeZone)} (${found.siteTimeZone})`,
				pdfSha256: found.revision.pdf_sha256
			};
			const recipients = [
				{ email: actor.email, name: actor.name, href: `${config.origin}/portal/reports/${revisionId}` },
				...(preparer
					? [
							{
								email: preparer.email,
								name: preparer.name,
								href: `${config.origin}/surveys/${found.surveyId}/report`
							}
						]
					: [])
			];
			for (const { email, name, href } of recipients)
				await mail.queue(trx, {
					template: 'acknowledgement-receipt',
					practiceId: actor.practiceId,
					toEmail: email,
					toName: name,
					...acknowledgementReceiptMail({ ...facts, name, href })
				});
			return requireFound(await acknowledgements.byPerson(revisionId, actor.userId), 'acknowledgement');
		});
	}

	/** The client's side says that an action is done; the consultant confirms it later. */
	async function completeAction(
		actor: Actor,
		actionId: string,
		note: string,
		requestId: string
	): Promise<void> {
		requirePermission(actor, 'portal.act');
		const scope = scopeOf(actor);
		await withTransaction(db, async (trx) => {
			const own = { id: actionId, practice_id: scope.practiceId, client_id: scope.clientId };
			const action = requireFound(
				await trx('actions').where(own).whereNotNull('published_at').first(),
				'action'
			);
			if (action.side !== 'client')
				throw new AppError(
					'forbidden',
					'This action is for your consultant to complete; ask them about its progress.'
				);
			if (action.status !== 'open') return;
			const now = clock();
			await trx('actions')
				.where(own)
				.update({ status: 'done', done_at: now.toISOString(), done_by: actor.userId, done_note: note });
			await appendAudit(
				trx,
				actor,
				{ action: 'action.done', subjectKind: 'action', subjectId: actionId, detail: { note } },
				now,
				requestId
			);
		});
	}

	return { reports, report, sites, site, actions, acknowledge, completeAction };
}
