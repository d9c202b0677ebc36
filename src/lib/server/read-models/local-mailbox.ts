import type { Db } from '../db/database';
import type { OutboxMailRow } from '../db/rows';

export type LocalMailLine = Pick<
	OutboxMailRow,
	'id' | 'to_email' | 'to_name' | 'subject' | 'status' | 'created_at'
>;

const MOST_MAILS = 200;

/** Across practices by design: only the mailbox of a demo or of development reads it. */
export function localMails(db: Db): Promise<LocalMailLine[]> {
	return db('mail_outbox')
		.orderBy('created_at', 'desc')
		.limit(MOST_MAILS)
		.select('id', 'to_email', 'to_name', 'subject', 'status', 'created_at');
}

export function localMail(db: Db, id: string): Promise<OutboxMailRow | undefined> {
	return db('mail_outbox').where({ id }).first();
}
