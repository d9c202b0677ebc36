import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { InvitationRow } from '../db/rows';

export type NewInvitation = Pick<
	InvitationRow,
	'client_id' | 'email' | 'name' | 'role' | 'token_hash' | 'invited_by' | 'created_at' | 'expires_at'
>;

/** Invitations of one practice. */
export function invitationsRepository(db: Db, scope: { practiceId: string }) {
	const pending = () =>
		db('invitations')
			.where({ practice_id: scope.practiceId })
			.whereNull('accepted_at')
			.whereNull('revoked_at');

	return {
		pendingById: (id: string): Promise<InvitationRow | undefined> => pending().andWhere({ id }).first(),

		pendingFor: (email: string): Promise<InvitationRow | undefined> => pending().andWhere({ email }).first(),

		async insert(entry: NewInvitation): Promise<string> {
			const id = newId();
			await db('invitations').insert({ id, practice_id: scope.practiceId, ...entry });
			return id;
		},

		/** A new token takes the place of the old one, which opens nothing any more. */
		async renew(id: string, tokenHash: string, expiresAt: string): Promise<void> {
			await pending().andWhere({ id }).update({ token_hash: tokenHash, expires_at: expiresAt });
		},

		revoke: (id: string, now: string): Promise<number> =>
			pending().andWhere({ id }).update({ revoked_at: now })
	};
}

/** The invitation that a mailed token opens, whichever practice sent it: the token is the right to see it. */
export function openInvitation(db: Db, tokenHash: string, now: string): Promise<InvitationRow | undefined> {
	return db('invitations')
		.where({ token_hash: tokenHash })
		.whereNull('accepted_at')
		.whereNull('revoked_at')
		.andWhere('expires_at', '>', now)
		.first();
}

/** False when somebody was quicker with the same token. */
export async function useInvitation(db: Db, id: string, now: string): Promise<boolean> {
	const used = await db('invitations')
		.where({ id })
		.whereNull('accepted_at')
		.whereNull('revoked_at')
		.andWhere('expires_at', '>', now)
		.update({ accepted_at: now });
	return used === 1;
}
