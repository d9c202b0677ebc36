import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { UserRow } from '../db/rows';

/** People, by their own address or id. A person may belong to several practices, so there is no practice here. */
export function usersRepository(db: Db) {
	return {
		byId: (id: string): Promise<UserRow | undefined> => db('users').where({ id }).first(),

		/** `email` in its stored form (see normaliseEmail). */
		byEmail: (email: string): Promise<UserRow | undefined> => db('users').where({ email }).first(),

		async insert(entry: { email: string; name: string; now: string }): Promise<string> {
			const id = newId();
			await db('users').insert({
				id,
				email: entry.email,
				name: entry.name,
				created_at: entry.now
			});
			return id;
		},

		async setPasswordHash(id: string, passwordHash: string): Promise<void> {
			await db('users').where({ id }).update({ password_hash: passwordHash });
		},

		async rename(id: string, name: string): Promise<void> {
			await db('users').where({ id }).update({ name });
		},

		/** The mailbox has been proven by a link sent to it; the first proof stays. */
		async markVerified(id: string, now: string): Promise<void> {
			await db('users').where({ id }).whereNull('email_verified_at').update({ email_verified_at: now });
		}
	};
}
