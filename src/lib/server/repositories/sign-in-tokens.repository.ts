import type { Db } from '../db/database';
import type { PasswordResetRow, VerificationTokenRow } from '../db/rows';

/** One-time tokens of sign-in links and of password resets, by their hash. */
export function signInTokensRepository(db: Db) {
	return {
		async addLink(row: VerificationTokenRow, now: string): Promise<void> {
			await db('verification_tokens').where('expires_at', '<=', now).delete();
			await db('verification_tokens').insert(row);
		},

		/** The row, for the one who deletes it: of two simultaneous uses the second deletes nothing and gets nothing. */
		async takeLink(tokenHash: string): Promise<VerificationTokenRow | undefined> {
			const row = await db('verification_tokens').where({ token_hash: tokenHash }).first();
			const deleted = await db('verification_tokens').where({ token_hash: tokenHash }).delete();
			return deleted === 1 ? row : undefined;
		},

		async removeLinksOf(identifier: string): Promise<void> {
			await db('verification_tokens').where({ identifier }).delete();
		},

		async addReset(row: Omit<PasswordResetRow, 'used_at'>): Promise<void> {
			await db('password_resets').insert({ ...row, used_at: null });
		},

		openReset: (tokenHash: string, now: string): Promise<PasswordResetRow | undefined> =>
			db('password_resets')
				.where({ token_hash: tokenHash })
				.whereNull('used_at')
				.andWhere('expires_at', '>', now)
				.first(),

		/** Marks this and every other open reset of the person as used; false when it was used already. */
		async useReset(tokenHash: string, userId: string, now: string): Promise<boolean> {
			const used = await db('password_resets')
				.where({ token_hash: tokenHash, user_id: userId })
				.whereNull('used_at')
				.andWhere('expires_at', '>', now)
				.update({ used_at: now });
			await db('password_resets').where({ user_id: userId }).whereNull('used_at').update({ used_at: now });
			return used === 1;
		}
	};
}
