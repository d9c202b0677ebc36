import type { Db } from '../db/database';
import type { AuditEventRow } from '../db/rows';
import { likePattern, type ListPage, type ListQuery } from './list-query';

export const AUDIT_SORTS = ['at'] as const;
export type AuditSort = (typeof AUDIT_SORTS)[number];

export interface AuditFilter {
	/** Subject kind, e.g. "report". */
	kind: string;
	actorUserId: string;
}

export interface AuditChoices {
	kinds: string[];
	people: { id: string; name: string }[];
}

/** What happened in the practice, newest first unless asked otherwise. */
export async function listAudit(
	db: Db,
	practiceId: string,
	query: ListQuery<AuditSort> & AuditFilter
): Promise<ListPage<AuditEventRow>> {
	const found = db('audit_events').where({ practice_id: practiceId });
	if (query.kind !== '') void found.andWhere({ subject_kind: query.kind });
	if (query.actorUserId !== '') void found.andWhere({ actor_user_id: query.actorUserId });
	if (query.q !== '')
		void found.andWhere((either) => {
			for (const column of ['action', 'actor_name', 'detail_json', 'subject_id'])
				void either.orWhereRaw(`${column} like ? escape '\\'`, [likePattern(query.q)]);
		});
	const counted = await found.clone().count({ n: '*' }).first();
	const direction = query.descending ? 'desc' : 'asc';
	const rows = await found
		.clone()
		.orderBy([
			{ column: 'at', order: direction },
			{ column: 'id', order: direction }
		])
		.limit(query.pageSize)
		.offset((query.page - 1) * query.pageSize)
		.select('*');
	return { rows, total: Number(counted?.['n']), page: query.page, pageSize: query.pageSize };
}

/** By what the history can be narrowed. */
export async function auditChoices(db: Db, practiceId: string): Promise<AuditChoices> {
	const kinds: { subject_kind: string }[] = await db('audit_events')
		.where({ practice_id: practiceId })
		.distinct('subject_kind')
		.orderBy('subject_kind');
	const people: { id: string; name: string }[] = await db('memberships')
		.join('users', 'users.id', 'memberships.user_id')
		.where('memberships.practice_id', practiceId)
		.orderBy('users.name')
		.select('users.id as id', 'users.name as name');
	return { kinds: kinds.map(({ subject_kind }) => subject_kind), people };
}
