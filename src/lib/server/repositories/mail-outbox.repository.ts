import type { Db } from '../db/database';
import type { OutboxMailRow } from '../db/rows';

/** Mail of one practice; sending is the outbox's own matter (mail/outbox.ts). */
export function mailOutboxRepository(db: Db, scope: { practiceId: string }) {
	const mine = () => db('mail_outbox').where({ practice_id: scope.practiceId });

	return {
		byId: (id: string): Promise<OutboxMailRow | undefined> => mine().andWhere({ id }).first(),

		/** Due now, with a full set of attempts; only what has failed, so that nothing goes out twice. */
		retry: (id: string, now: string): Promise<number> =>
			mine()
				.andWhere({ id, status: 'failed' })
				.update({ status: 'queued', attempts: 0, next_attempt_at: now })
	};
}
