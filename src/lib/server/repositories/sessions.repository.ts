import type { Db } from '../db/database';
import type { SessionRow } from '../db/rows';

/** Sessions of one person, or one session by the hash of its token; the token itself is never stored. */
export function sessionsRepository(db: Db) {
	return {
		byHash: (tokenHash: string): Promise<SessionRow | undefined> =>
			db('sessions').where({ token_hash: tokenHash }).first(),

		ofUser: (userId: string, now: Date): Promise<SessionRow[]> =>
			db('sessions')
				.where({ user_id: userId })
				.andWhere('expires_at', '>', now.toISOString())
				.orderBy('last_seen_at', 'desc'),

		async insert(row: SessionRow): Promise<void> {
			await db('sessions').insert(row);
		},

		async extend(tokenHash: string, expires: Date): Promise<void> {
			await db('sessions').where({ token_hash: tokenHash }).update({ expires_at: expires.toISOString() });
		},

		async seen(tokenHash: string, now: Date): Promise<void> {
			await db('sessions').where({ token_hash: tokenHash }).update({ last_seen_at: now.toISOString() });
		},

		async chooseMembership(tokenHash: string, membershipId: string): Promise<void> {
			await db('sessions').where({ token_hash: tokenHash }).update({ membership_id: membershipId });
		},

		async remove(tokenHash: string): Promise<void> {
			await db('sessions').where({ token_hash: tokenHash }).delete();
		},

		removeOfUser: (userId: string, except: string | null = null): Promise<number> =>
			db('sessions')
				.where({ user_id: userId })
				.modify((query) => {
					if (except !== null) void query.andWhereNot({ token_hash: except });
				})
				.delete(),

		removeOneOfUser: (userId: string, tokenHash: string): Promise<number> =>
			db('sessions').where({ user_id: userId, token_hash: tokenHash }).delete(),

		removeExpired: (now: Date): Promise<number> =>
			db('sessions').where('expires_at', '<=', now.toISOString()).delete()
	};
}
