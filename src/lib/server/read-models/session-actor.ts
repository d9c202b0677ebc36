import type { Actor, Role } from '../../access/access';
import type { Db } from '../db/database';

interface MembershipOfUser {
	membership_id: string;
	role: Role;
	client_id: string | null;
	client_name: string | null;
	practice_id: string;
	practice_name: string;
	user_id: string;
	user_name: string;
	email: string;
}

/** A place where the person may act. */
export interface Place {
	actor: Actor;
	clientName: string | null;
}

function toPlace(row: MembershipOfUser): Place {
	return {
		actor: {
			userId: row.user_id,
			name: row.user_name,
			email: row.email,
			practiceId: row.practice_id,
			practiceName: row.practice_name,
			membershipId: row.membership_id,
			role: row.role,
			clientId: row.client_id
		},
		clientName: row.client_name
	};
}

/** Every open membership of an enabled person, oldest first. */
export async function placesOfUser(db: Db, userId: string): Promise<Place[]> {
	const rows: MembershipOfUser[] = await db('memberships')
		.join('users', 'users.id', 'memberships.user_id')
		.join('practices', 'practices.id', 'memberships.practice_id')
		.leftJoin('clients', 'clients.id', 'memberships.client_id')
		.where('memberships.user_id', userId)
		.whereNull('memberships.revoked_at')
		.whereNull('users.disabled_at')
		.orderBy(['memberships.created_at', 'memberships.id'])
		.select(
			'memberships.id as membership_id',
			'memberships.role as role',
			'memberships.client_id as client_id',
			'clients.name as client_name',
			'memberships.practice_id as practice_id',
			'practices.name as practice_name',
			'users.id as user_id',
			'users.name as user_name',
			'users.email as email'
		);
	return rows.map(toPlace);
}
