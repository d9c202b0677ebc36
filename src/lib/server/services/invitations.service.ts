import type { Role } from '../../access/access';
import { appendAudit } from '../audit/audit-log';
import { hashPassword, verifyPassword } from '../auth/password';
import { hashToken } from '../auth/tokens';
import { withTransaction } from '../db/database';
import { practiceRepository } from '../repositories/practice.repository';
import { openInvitation, useInvitation } from '../repositories/invitations.repository';
import { membershipsRepository } from '../repositories/memberships.repository';
import { usersRepository } from '../repositories/users.repository';
import { listClientChoices } from '../read-models/people-list';
import type { ServiceDeps } from '../service-deps';
import { err, ok, type Result } from '../../result';

export interface OpenInvitation {
	email: string;
	name: string;
	role: Role;
	practiceName: string;
	clientName: string | null;
	/** The person has an account with a password: it is asked for, and none is chosen. */
	hasAccount: boolean;
}

export type AcceptProblem = { code: 'of-no-use' } | { code: 'wrong-password' };

/** What the holder of a mailed invitation may do; the token is the right to do it. */
export function createInvitationsService({ db, clock }: ServiceDeps) {
	/** Looks without using up. */
	async function open(token: string): Promise<OpenInvitation | null> {
		const row = await openInvitation(db, hashToken(token), clock().toISOString());
		if (!row) return null;
		const practice = await practiceRepository(db, { practiceId: row.practice_id }).get();
		const clients = row.client_id === null ? [] : await listClientChoices(db, row.practice_id);
		const user = await usersRepository(db).byEmail(row.email);
		return {
			email: row.email,
			name: user?.name ?? row.name,
			role: row.role,
			practiceName: practice.name,
			clientName: clients.find(({ id }) => id === row.client_id)?.name ?? null,
			hasAccount: user !== undefined && user.password_hash !== null
		};
	}

	/**
	 * Makes the person a member. Somebody new chooses name and password; somebody with an account proves it with
	 * the password they have: a forwarded invitation must not open another person's account.
	 */
	async function accept(
		token: string,
		given: { name: string; password: string }
	): Promise<Result<{ email: string }, AcceptProblem>> {
		const now = clock().toISOString();
		const invitation = await openInvitation(db, hashToken(token), now);
		if (!invitation) return err({ code: 'of-no-use' });
		const existing = await usersRepository(db).byEmail(invitation.email);
		if (existing && existing.disabled_at !== null) return err({ code: 'of-no-use' });
		const known = existing !== undefined && existing.password_hash !== null;
		if (known && !(await verifyPassword(existing.password_hash, given.password)))
			return err({ code: 'wrong-password' });
		const passwordHash = known ? null : await hashPassword(given.password);

		return withTransaction(db, async (trx) => {
			if (!(await useInvitation(trx, invitation.id, now))) return err({ code: 'of-no-use' });
			const users = usersRepository(trx);
			const userId = existing?.id ?? (await users.insert({ email: invitation.email, name: given.name, now }));
			if (passwordHash !== null) await users.setPasswordHash(userId, passwordHash);
			await users.markVerified(userId, now);
			const membershipId = await membershipsRepository(trx, { practiceId: invitation.practice_id }).grant({
				userId,
				role: invitation.role,
				clientId: invitation.client_id,
				now
			});
			await appendAudit(
				trx,
				{ userId, name: existing?.name ?? given.name, practiceId: invitation.practice_id },
				{
					action: 'invitation.accepted',
					subjectKind: 'membership',
					subjectId: membershipId,
					detail: { email: invitation.email, role: invitation.role }
				},
				clock()
			);
			return ok({ email: invitation.email });
		});
	}

	return { open, accept };
}
