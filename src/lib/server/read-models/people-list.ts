import type { Role } from '../../access/access';
import type { Db } from '../db/database';

export interface Member {
	membershipId: string;
	userId: string;
	name: string;
	email: string;
	role: Role;
	clientName: string | null;
	since: string;
	lastSeenAt: string | null;
}

export interface PendingInvitation {
	id: string;
	name: string;
	email: string;
	role: Role;
	clientName: string | null;
	invitedBy: string;
	createdAt: string;
	expiresAt: string;
}

export interface ClientChoice {
	id: string;
	name: string;
}

/** Open memberships of the practice, by role and name. */
export async function listMembers(db: Db, practiceId: string): Promise<Member[]> {
	return db('memberships')
		.join('users', 'users.id', 'memberships.user_id')
		.leftJoin('clients', 'clients.id', 'memberships.client_id')
		.where('memberships.practice_id', practiceId)
		.whereNull('memberships.revoked_at')
		.orderByRaw(
			"case memberships.role when 'owner' then 0 when 'checker' then 1 when 'engineer' then 2 else 3 end"
		)
		.orderBy(['clients.name', 'users.name'])
		.select(
			'memberships.id as membershipId',
			'users.id as userId',
			'users.name as name',
			'users.email as email',
			'memberships.role as role',
			'clients.name as clientName',
			'memberships.created_at as since',
			db('sessions').max('last_seen_at').whereRaw('sessions.membership_id = memberships.id').as('lastSeenAt')
		);
}

export async function listPendingInvitations(db: Db, practiceId: string): Promise<PendingInvitation[]> {
	return db('invitations')
		.join('users', 'users.id', 'invitations.invited_by')
		.leftJoin('clients', 'clients.id', 'invitations.client_id')
		.where('invitations.practice_id', practiceId)
		.whereNull('invitations.accepted_at')
		.whereNull('invitations.revoked_at')
		.orderBy('invitations.created_at', 'desc')
		.select(
			'invitations.id as id',
			'invitations.name as name',
			'invitations.email as email',
			'invitations.role as role',
			'clients.name as clientName',
			'users.name as invitedBy',
			'invitations.created_at as createdAt',
			'invitations.expires_at as expiresAt'
		);
}

/** Organisations to which a person can be invited. */
export async function listClientChoices(db: Db, practiceId: string): Promise<ClientChoice[]> {
	return db('clients')
		.where({ practice_id: practiceId })
		.whereNull('archived_at')
		.orderBy('name')
		.select('id', 'name');
}
