import type { Db } from '../db/database';
import type { OutboxMailRow } from '../db/rows';
import { newId } from '../db/ids';
import type { Log } from '../log';

export interface MailMessage {
	template: string;
	practiceId: string | null;
	toEmail: string;
	toName: string;
	subject: string;
	text: string;
	html: string;
}

/** Hands one message to the world; throws when it could not. */
export type MailTransport = (mail: OutboxMailRow) => Promise<void>;

const RETRY_AFTER_S = [30, 120, 600, 3600, 6 * 3600];

/** Mail is written to the database with the deed that causes it, and sent by the worker: none is lost, none sent twice. */
export function createOutbox(db: Db, send: MailTransport, clock: () => Date, log: Log) {
	/** Queues a message inside the caller's transaction. */
	async function queue(trx: Db, message: MailMessage): Promise<void> {
		const now = clock().toISOString();
		await trx('mail_outbox').insert({
			id: newId(),
			practice_id: message.practiceId,
			template: message.template,
			to_email: message.toEmail,
			to_name: message.toName,
			subject: message.subject,
			text: message.text,
			html: message.html,
			status: 'queued',
			next_attempt_at: now,
			created_at: now
		});
	}

	async function deliver(mail: OutboxMailRow): Promise<void> {
		const attempts = mail.attempts + 1;
		try {
			await send(mail);
			await db('mail_outbox')
				.where({ id: mail.id })
				.update({ status: 'sent', attempts, sent_at: clock().toISOString(), last_error: null });
		} catch (cause) {
			const retry_s = RETRY_AFTER_S[attempts - 1];
			log.warn({ err: cause, mail: mail.id, attempts }, 'mail not sent');
			await db('mail_outbox')
				.where({ id: mail.id })
				.update({
					attempts,
					last_error: cause instanceof Error ? cause.message : String(cause),
					status: retry_s === undefined ? 'failed' : 'queued',
					next_attempt_at: new Date(clock().getTime() + (retry_s ?? 0) * 1000).toISOString()
				});
		}
	}

	/** Sends what is due, oldest first; answers how many were tried. */
	async function deliverDue(): Promise<number> {
		const due = await db('mail_outbox')
			.where({ status: 'queued' })
			.andWhere('next_attempt_at', '<=', clock().toISOString())
			.orderBy('created_at')
			.limit(20);
		for (const mail of due) await deliver(mail);
		return due.length;
	}

	return { queue, deliverDue };
}

export type Outbox = ReturnType<typeof createOutbox>;
