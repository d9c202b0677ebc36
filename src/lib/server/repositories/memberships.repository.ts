import type { Role } from '../../access/access';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { MembershipRow } from '../db/rows';

/** Who belongs to one practice, in which role. */
export function membershipsRepository(db: Db, scope: { practiceId: string }) {
	const mine = () => db('memberships').where({ practice_id: scope.practiceId });

	return {
		byId: (id: string): Promise<MembershipRow | undefined> => mine().andWhere({ id }).first(),

		ofUser: (userId: string): Promise<MembershipRow | undefined> =>
			mine().andWhere({ user_id: userId }).first(),

		/** Owners who can sign in; a practice always keeps one. */
		async countActiveOwners(): Promise<number> {
			const row = await db('memberships')
				.join('users', 'users.id', 'memberships.user_id')
				.where('memberships.practice_id', scope.practiceId)
				.where('memberships.role', 'owner')
				.whereNull('memberships.revoked_at')
				.whereNull('users.disabled_at')
				.count({ n: '*' })
				.first();
			return Number(row?.['n']);
		},

		/** A new membership, or the old one of the same person opened again in the role now given. */
		async grant(entry: {
			userId: string;
			role: Role;
			clientId: string | null;
			now: string;
		}): Promise<string> {
			const existing = await mine().andWhere({ user_id: entry.userId }).first();
			if (existing) {
				await mine()
					.andWhere({ id: existing.id })
					.update({ role: entry.role, client_id: entry.clientId, revoked_at: null });
				return existing.id;
			}
			const id = newId();
			await db('memberships').insert({
				id,
				user_id: entry.userId,
				practice_id: scope.practiceId,
				role: entry.role,
				client_id: entry.clientId,
				created_at: entry.now
			});
			return id;
		},

		async setRole(id: string, role: Role): Promise<void> {
			await mine().andWhere({ id }).update({ role });
		},

		/** Access ends at once: the membership is closed and every session that stands on it goes. */
		async revoke(id: string, now: string): Promise<void> {
			await mine().andWhere({ id }).update({ revoked_at: now });
			await db('sessions').where({ membership_id: id }).delete();
		}
	};
}
