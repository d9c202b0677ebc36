import type { Adapter, AdapterUser } from '@auth/core/adapters';
import type { Db } from '../db/database';
import type { UserRow } from '../db/rows';
import { sessionsRepository } from '../repositories/sessions.repository';
import { signInTokensRepository } from '../repositories/sign-in-tokens.repository';
import { normaliseEmail } from './email-address';
import { hashToken } from './tokens';

export interface AdapterContext {
	db: Db;
	clock: () => Date;
	/** Shown in the person's list of devices. */
	userAgent: string;
}

const LONGEST_USER_AGENT = 300;

function toAdapterUser(row: UserRow): AdapterUser {
	return {
		id: row.id,
		email: row.email,
		name: row.name,
		emailVerified: row.email_verified_at === null ? null : new Date(row.email_verified_at)
	};
}

/**
 * Auth.js' view of our tables. Tokens are hashed on the way in and given back plain, so that reading the
 * database opens no session. People come by invitation only: the adapter creates none, and shows none that is
 * disabled.
 */
export function knexAdapter({ db, clock, userAgent }: AdapterContext): Adapter {
	const sessions = sessionsRepository(db);
	const tokens = signInTokensRepository(db);
	const enabledUser = (where: Partial<UserRow>) => db('users').where(where).whereNull('disabled_at').first();
	const refuse = () => {
		throw new Error('people come by invitation only');
	};

	return {
		createUser: refuse,
		linkAccount: refuse,
		getUserByAccount: async () => null,

		async getUser(id) {
			const row = await enabledUser({ id });
			return row ? toAdapterUser(row) : null;
		},

		async getUserByEmail(email) {
			const row = await enabledUser({ email: normaliseEmail(email) });
			return row ? toAdapterUser(row) : null;
		},

		async updateUser(user) {
			if (user.emailVerified)
				await db('users')
					.where({ id: user.id })
					.update({ email_verified_at: user.emailVerified.toISOString() });
			const row = await enabledUser({ id: user.id });
			if (!row) throw new Error('the person to update does not exist');
			return toAdapterUser(row);
		},

		async createSession(session) {
			const now = clock();
			await sessions.removeExpired(now);
			await sessions.insert({
				token_hash: hashToken(session.sessionToken),
				user_id: session.userId,
				membership_id: null,
				user_agent: userAgent.slice(0, LONGEST_USER_AGENT),
				created_at: now.toISOString(),
				last_seen_at: now.toISOString(),
				expires_at: session.expires.toISOString()
			});
			return session;
		},

		async getSessionAndUser(sessionToken) {
			const row = await sessions.byHash(hashToken(sessionToken));
			if (!row || row.expires_at <= clock().toISOString()) return null;
			const user = await enabledUser({ id: row.user_id });
			if (!user) return null;
			return {
				session: { sessionToken, userId: row.user_id, expires: new Date(row.expires_at) },
				user: toAdapterUser(user)
			};
		},

		async updateSession({ sessionToken, expires }) {
			if (expires) await sessions.extend(hashToken(sessionToken), expires);
			const row = await sessions.byHash(hashToken(sessionToken));
			return row ? { sessionToken, userId: row.user_id, expires: new Date(row.expires_at) } : null;
		},

		async deleteSession(sessionToken) {
			await sessions.remove(hashToken(sessionToken));
		},

		async createVerificationToken(verification) {
			await tokens.addLink(
				{
					identifier: normaliseEmail(verification.identifier),
					token_hash: hashToken(verification.token),
					expires_at: verification.expires.toISOString()
				},
				clock().toISOString()
			);
			return verification;
		},

		async useVerificationToken({ identifier, token }) {
			const row = await tokens.takeLink(hashToken(token));
			if (!row || row.identifier !== normaliseEmail(identifier)) return null;
			return { identifier: row.identifier, token, expires: new Date(row.expires_at) };
		}
	};
}
