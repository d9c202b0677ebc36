import type { Actor } from '../../access/access';
import { requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requireClientId, requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import { newQueryMail, queryAnswerMail } from '../mail/templates/report-mails';
import { countThreads, queryThreads, type QueryThread } from '../read-models/query-threads';
import { queriesRepository, type QueryScope } from '../repositories/queries.repository';
import type { ServiceDeps } from '../service-deps';

export const QUERY_PAGE_SIZE = 20;

/** Questions on issued reports: the client asks, the practice answers, both by the same thread. */
export function createQueriesService({ db, mail, clock, config }: ServiceDeps) {
	function scopeOf(actor: Actor): QueryScope {
		return actor.role === 'client'
			? { practiceId: actor.practiceId, clientId: requireClientId(actor) }
			: { practiceId: actor.practiceId };
	}

	function permit(actor: Actor): void {
		requirePermission(actor, actor.role === 'client' ? 'portal.query' : 'report.read');
	}

	async function threadIn(handle: Db, scope: QueryScope, queryId: string): Promise<QueryThread> {
		const [thread] = await queryThreads(handle, { ...scope, queryId });
		return requireFound(thread, 'question');
	}

	/** Tells the other side, inside the same transaction. */
	async function notify(trx: Db, actor: Actor, thread: QueryThread, body: string): Promise<void> {
		const fromClient = actor.role === 'client';
		const recipients: { email: string; name: string }[] = fromClient
			? await trx('report_revisions as v')
					.join('users as u', 'u.id', 'v.prepared_by')
					.where({ 'v.id': thread.revisionId, 'v.practice_id': actor.practiceId })
					.select('u.email', 'u.name')
			: await trx('queries as q')
					.join('users as u', 'u.id', 'q.asked_by')
					.where({ 'q.id': thread.id, 'q.practice_id': actor.practiceId })
					.select('u.email', 'u.name');
		const letter = fromClient ? newQueryMail : queryAnswerMail;
		for (const recipient of recipients)
			await mail.queue(trx, {
				template: fromClient ? 'query-asked' : 'query-answered',
				practiceId: actor.practiceId,
				toEmail: recipient.email,
				toName: recipient.name,
				...letter({
					name: recipient.name,
					practiceName: actor.practiceName,
					reportNumber: thread.reportNumber,
					revision: thread.revision,
					siteName: thread.siteName,
					author: actor.name,
					body,
					href: fromClient
						? `${config.origin}/queries/${thread.id}`
						: `${config.origin}/portal/reports/${thread.revisionId}#questions`
				})
			});
	}

	async function list(actor: Actor, filter: { status: 'open' | 'answered' | 'closed' | null; page: number }) {
		requirePermission(actor, 'report.read');
		const where = { practiceId: actor.practiceId, ...(filter.status ? { status: filter.status } : {}) };
		return {
			threads: await queryThreads(db, {
				...where,
				limit: QUERY_PAGE_SIZE,
				offset: (filter.page - 1) * QUERY_PAGE_SIZE
			}),
			total: await countThreads(db, where)
		};
	}

	async function thread(actor: Actor, queryId: string): Promise<QueryThread> {
		permit(actor);
		return threadIn(db, scopeOf(actor), queryId);
	}

	/** A new question about a revision that was issued to this client. */
	async function ask(actor: Actor, revisionId: string, body: string, requestId: string): Promise<string> {
		requirePermission(actor, 'portal.query');
		const clientId = requireClientId(actor);
		return withTransaction(db, async (trx) => {
			requireFound(
				await trx('report_revisions')
					.where({ id: revisionId, practice_id: actor.practiceId, client_id: clientId })
					.whereIn('status', ['issued', 'superseded', 'withdrawn'])
					.first('id'),
				'report'
			);
			const at = clock().toISOString();
			const queries = queriesRepository(trx, { practiceId: actor.practiceId, clientId });
			const queryId = await queries.open({ clientId, revisionId, askedBy: actor.userId, at });
			await queries.addMessage({ queryId, authorId: actor.userId, body, at });
			await appendAudit(
				trx,
				actor,
				{ action: 'query.asked', subjectKind: 'query', subjectId: queryId },
				clock(),
				requestId
			);
			await notify(
				trx,
				actor,
				await threadIn(trx, { practiceId: actor.practiceId, clientId }, queryId),
				body
			);
			return queryId;
		});
	}

	/** A further message from either side. An answer of the practice marks the question answered, one of the client opens it again. */
	async function reply(actor: Actor, queryId: string, body: string, requestId: string): Promise<void> {
		permit(actor);
		const scope = scopeOf(actor);
		await withTransaction(db, async (trx) => {
			const queries = queriesRepository(trx, scope);
			requireFound(await queries.byId(queryId), 'question');
			const at = clock().toISOString();
			await queries.addMessage({ queryId, authorId: actor.userId, body, at });
			await queries.setStatus(queryId, actor.role === 'client' ? 'open' : 'answered', at);
			const action = actor.role === 'client' ? 'query.followed-up' : 'query.answered';
			await appendAudit(trx, actor, { action, subjectKind: 'query', subjectId: queryId }, clock(), requestId);
			await notify(trx, actor, await threadIn(trx, scope, queryId), body);
		});
	}

	async function close(actor: Actor, queryId: string, requestId: string): Promise<void> {
		permit(actor);
		await withTransaction(db, async (trx) => {
			const queries = queriesRepository(trx, scopeOf(actor));
			requireFound(await queries.byId(queryId), 'question');
			await queries.setStatus(queryId, 'closed', clock().toISOString());
			await appendAudit(
				trx,
				actor,
				{ action: 'query.closed', subjectKind: 'query', subjectId: queryId },
				clock(),
				requestId
			);
		});
	}

	return { list, thread, ask, reply, close };
}
