import type { Db } from '../db/database';
import type { OutboxMailRow } from '../db/rows';
import { likePattern, type ListPage, type ListQuery } from './list-query';

export const MAIL_SORTS = ['created', 'to', 'subject', 'status'] as const;
export type MailSort = (typeof MAIL_SORTS)[number];
const COLUMN: Record<MailSort, keyof OutboxMailRow> = {
	created: 'created_at',
	to: 'to_email',
	subject: 'subject',
	status: 'status'
};

export type MailLine = Pick<
	OutboxMailRow,
	| 'id'
	| 'to_email'
	| 'to_name'
	| 'subject'
	| 'status'
	| 'attempts'
	| 'next_attempt_at'
	| 'last_error'
	| 'created_at'
	| 'sent_at'
>;

/** Mail that the practice's work has caused; its text, which may hold one-time links, is not shown. */
export async function listMail(
	db: Db,
	practiceId: string,
	query: ListQuery<MailSort> & { status: OutboxMailRow['status'] | null }
): Promise<ListPage<MailLine>> {
	const found = db('mail_outbox').where({ practice_id: practiceId });
	if (query.status !== null) void found.andWhere({ status: query.status });
	if (query.q !== '')
		void found.andWhere((either) => {
			for (const column of ['to_email', 'to_name', 'subject'])
				void either.orWhereRaw(`${column} like ? escape '\\'`, [likePattern(query.q)]);
		});
	const counted = await found.clone().count({ n: '*' }).first();
	const rows = await found
		.clone()
		.orderBy(COLUMN[query.sort], query.descending ? 'desc' : 'asc')
		.orderBy('id')
		.limit(query.pageSize)
		.offset((query.page - 1) * query.pageSize)
		.select(
			'id',
			'to_email',
			'to_name',
			'subject',
			'status',
			'attempts',
			'next_attempt_at',
			'last_error',
			'created_at',
			'sent_at'
		);
	return { rows, total: Number(counted?.['n']), page: query.page, pageSize: query.pageSize };
}
