import type { Db } from '../db/database';
import type { QueryRow } from '../db/rows';

export interface QueryThread {
	id: string;
	status: QueryRow['status'];
	revisionId: string;
	reportNumber: string;
	revision: string;
	clientName: string;
	siteName: string;
	surveyId: string;
	askedBy: string;
	updatedAt: string;
	messages: { id: string; author: string; fromPractice: boolean; body: string; at: string }[];
}

export interface ThreadFilter {
	practiceId: string;
	clientId?: string;
	revisionId?: string;
	queryId?: string;
	status?: QueryRow['status'];
	limit?: number;
	offset?: number;
}

function filtered(db: Db, filter: ThreadFilter) {
	const query = db('queries as q')
		.join('report_revisions as v', 'v.id', 'q.revision_id')
		.join('reports as r', 'r.id', 'v.report_id')
		.join('clients as c', 'c.id', 'q.client_id')
		.join('sites as t', 't.id', 'r.site_id')
		.join('users as u', 'u.id', 'q.asked_by')
		.where('q.practice_id', filter.practiceId);
	if (filter.clientId !== undefined) void query.where('q.client_id', filter.clientId);
	if (filter.revisionId !== undefined) void query.where('q.revision_id', filter.revisionId);
	if (filter.queryId !== undefined) void query.where('q.id', filter.queryId);
	if (filter.status !== undefined) void query.where('q.status', filter.status);
	return query;
}

export async function countThreads(db: Db, filter: ThreadFilter): Promise<number> {
	const row: { n: number } | undefined = await filtered(db, filter)
		.count<{ n: number }[]>('q.id as n')
		.first();
	return Number(row?.n ?? 0);
}

/** Questions with their messages, the latest first. */
export async function queryThreads(db: Db, filter: ThreadFilter): Promise<QueryThread[]> {
	const threads = await filtered(db, filter)
		.select<Omit<QueryThread, 'messages'>[]>({
			id: 'q.id',
			status: 'q.status',
			revisionId: 'q.revision_id',
			reportNumber: 'r.number',
			revision: 'v.revision',
			clientName: 'c.name',
			siteName: 't.name',
			surveyId: 'r.survey_id',
			askedBy: 'u.name',
			updatedAt: 'q.updated_at'
		})
		.orderBy('q.updated_at', 'desc')
		.limit(filter.limit ?? 50)
		.offset(filter.offset ?? 0);
	const messages = await db('query_messages as m')
		.join('users as u', 'u.id', 'm.author_id')
		.leftJoin('memberships as b', (on) =>
			on.on('b.user_id', 'm.author_id').andOn('b.practice_id', 'm.practice_id')
		)
		.where('m.practice_id', filter.practiceId)
		.whereIn(
			'm.query_id',
			threads.map((thread) => thread.id)
		)
		.orderBy('m.created_at')
		.select<{ id: string; queryId: string; author: string; role: string | null; body: string; at: string }[]>(
			{
				id: 'm.id',
				queryId: 'm.query_id',
				author: 'u.name',
				role: 'b.role',
				body: 'm.body',
				at: 'm.created_at'
			}
		);
	return threads.map((thread) => ({
		...thread,
		messages: messages
			.filter((message) => message.queryId === thread.id)
			.map(({ id, author, role, body, at }) => ({ id, author, fromPractice: role !== 'client', body, at }))
	}));
}
