import type { Actor, Role } from '../../access/access';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { normaliseEmail } from '../auth/email-address';
import { requirePermission } from '../auth/require-permission';
import { hashToken, newToken } from '../auth/tokens';
import { withTransaction, type Db } from '../db/database';
import { invitationMail } from '../mail/templates/account-mails';
import {
	listClientChoices,
	listMembers,
	listPendingInvitations,
	type ClientChoice,
	type Member,
	type PendingInvitation
} from '../read-models/people-list';
import { invitationsRepository } from '../repositories/invitations.repository';
import { membershipsRepository } from '../repositories/memberships.repository';
import { usersRepository } from '../repositories/users.repository';
import type { ServiceDeps } from '../service-deps';

export const INVITATION_VALID_DAYS = 7;
const DAY_MS = 86_400_000;

export interface Invitee {
	email: string;
	name: string;
	role: Role;
	/** The organisation, exactly for the role client. */
	clientId: string | null;
}

interface InvitationToMail {
	id: string;
	email: string;
	name: string;
	role: Role;
	clientName: string | null;
}

/** Who belongs to the practice: invitations, roles, and the end of access. */
export function createPeopleService({ db, clock, config, mail }: ServiceDeps) {
	const expiry = () => new Date(clock().getTime() + INVITATION_VALID_DAYS * DAY_MS).toISOString();

	async function list(
		actor: Actor
	): Promise<{ members: Member[]; invitations: PendingInvitation[]; clients: ClientChoice[] }> {
		requirePermission(actor, 'practice.manage');
		return {
			members: await listMembers(db, actor.practiceId),
			invitations: await listPendingInvitations(db, actor.practiceId),
			clients: await listClientChoices(db, actor.practiceId)
		};
	}

	async function clientNameOf(trx: Db, actor: Actor, clientId: string | null): Promise<string | null> {
		if (clientId === null) return null;
		const choices = await listClientChoices(trx, actor.practiceId);
		return requireFound(
			choices.find(({ id }) => id === clientId),
			'client'
		).name;
	}

	async function queueInvitation(
		trx: Db,
		actor: Actor,
		invitation: InvitationToMail,
		token: string
	): Promise<void> {
		await mail.queue(trx, {
			template: 'invitation',
			practiceId: actor.practiceId,
			toEmail: invitation.email,
			toName: invitation.name,
			...invitationMail({
				name: invitation.name,
				invitedBy: actor.name,
				practiceName: actor.practiceName,
				role: invitation.role,
				clientName: invitation.clientName,
				href: `${config.origin}/invitation/${token}`,
				validFor_days: INVITATION_VALID_DAYS
			})
		});
	}

	async function refuseDoubles(trx: Db, actor: Actor, email: string): Promise<void> {
		const user = await usersRepository(trx).byEmail(email);
		const membership = user && (await membershipsRepository(trx, actor).ofUser(user.id));
		if (membership && membership.revoked_at === null)
			throw new AppError('conflict', `${email} belongs to the practice already.`);
		if (await invitationsRepository(trx, actor).pendingFor(email))
			throw new AppError('conflict', `${email} is invited already. Send that invitation again instead.`);
	}

	async function createInvitation(actor: Actor, invitee: Invitee): Promise<string> {
		if ((invitee.role === 'client') !== (invitee.clientId !== null))
			throw new AppError('invalid', 'Choose the organisation for a client, and none for anybody else.');
		const email = normaliseEmail(invitee.email);
		const token = newToken();
		return withTransaction(db, async (trx) => {
			await refuseDoubles(trx, actor, email);
			const clientName = await clientNameOf(trx, actor, invitee.clientId);
			const id = await invitationsRepository(trx, actor).insert({
				client_id: invitee.clientId,
				email,
				name: invitee.name,
				role: invitee.role,
				token_hash: hashToken(token),
				invited_by: actor.userId,
				created_at: clock().toISOString(),
				expires_at: expiry()
			});
			await queueInvitation(
				trx,
				actor,
				{ id, email, name: invitee.name, role: invitee.role, clientName },
				token
			);
			await appendAudit(
				trx,
				actor,
				{
					action: 'person.invited',
					subjectKind: 'invitation',
					subjectId: id,
					detail: { email, role: invitee.role, client: clientName }
				},
				clock()
			);
			return id;
		});
	}

	async function invite(actor: Actor, invitee: Invitee): Promise<string> {
		requirePermission(actor, 'practice.manage');
		return createInvitation(actor, invitee);
	}

	/** People of a client may be invited by everyone who keeps the register; staff only by the owner. */
	async function inviteClientPerson(
		actor: Actor,
		person: { clientId: string; email: string; name: string }
	): Promise<string> {
		requirePermission(actor, 'register.write');
		return createInvitation(actor, { ...person, role: 'client' });
	}

	async function resendInvitation(actor: Actor, invitationId: string): Promise<void> {
		requirePermission(actor, 'practice.manage');
		const token = newToken();
		await withTransaction(db, async (trx) => {
			const invitations = invitationsRepository(trx, actor);
			const row = requireFound(await invitations.pendingById(invitationId), 'invitation');
			await invitations.renew(row.id, hashToken(token), expiry());
			const clientName = await clientNameOf(trx, actor, row.client_id);
			await queueInvitation(trx, actor, { ...row, clientName }, token);
			await appendAudit(
				trx,
				actor,
				{
					action: 'invitation.resent',
					subjectKind: 'invitation',
					subjectId: row.id,
					detail: { email: row.email }
				},
				clock()
			);
		});
	}

	async function revokeInvitation(actor: Actor, invitationId: string): Promise<void> {
		requirePermission(actor, 'practice.manage');
		await withTransaction(db, async (trx) => {
			const invitations = invitationsRepository(trx, actor);
			const row = requireFound(await invitations.pendingById(invitationId), 'invitation');
			await invitations.revoke(row.id, clock().toISOString());
			await appendAudit(
				trx,
				actor,
				{
					action: 'invitation.revoked',
					subjectKind: 'invitation',
					subjectId: row.id,
					detail: { email: row.email }
				},
				clock()
			);
		});
	}

	async function keepAnOwner(trx: Db, actor: Actor): Promise<void> {
		if ((await membershipsRepository(trx, actor).countActiveOwners()) < 1)
			throw new AppError('conflict', 'A practice needs an owner. Make somebody else an owner first.');
	}

	async function changeRole(actor: Actor, membershipId: string, role: Role): Promise<void> {
		requirePermission(actor, 'practice.manage');
		await withTransaction(db, async (trx) => {
			const memberships = membershipsRepository(trx, actor);
			const row = requireFound(await memberships.byId(membershipId), 'person');
			if (row.revoked_at !== null) requireFound(null, 'person');
			if (row.role === 'client' || role === 'client')
				throw new AppError(
					'invalid',
					'A client cannot become a consultant, nor the other way round. Remove the person and invite anew.'
				);
			if (row.role === role) return;
			await memberships.setRole(row.id, role);
			await keepAnOwner(trx, actor);
			await appendAudit(
				trx,
				actor,
				{
					action: 'person.role-changed',
					subjectKind: 'membership',
					subjectId: row.id,
					detail: { userId: row.user_id, from: row.role, to: role }
				},
				clock()
			);
		});
	}

	/** Ends access at once, on every device. What the person did stays, under the name. */
	async function revokeMembership(actor: Actor, membershipId: string): Promise<void> {
		requirePermission(actor, 'practice.manage');
		await withTransaction(db, async (trx) => {
			const memberships = membershipsRepository(trx, actor);
			const row = requireFound(await memberships.byId(membershipId), 'person');
			if (row.revoked_at !== null) requireFound(null, 'person');
			const user = requireFound(await usersRepository(trx).byId(row.user_id), 'person');
			await memberships.revoke(row.id, clock().toISOString());
			await keepAnOwner(trx, actor);
			await appendAudit(
				trx,
				actor,
				{
					action: 'person.removed',
					subjectKind: 'membership',
					subjectId: row.id,
					detail: { email: user.email, role: row.role }
				},
				clock()
			);
		});
	}

	return {
		list,
		invite,
		inviteClientPerson,
		resendInvitation,
		revokeInvitation,
		changeRole,
		revokeMembership
	};
}
