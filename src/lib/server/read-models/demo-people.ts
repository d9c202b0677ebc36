import type { Role } from '../../access/access';
import type { Db } from '../db/database';

export interface DemoPerson {
	name: string;
	email: string;
	role: Role;
	clientName: string | null;
}

const MOST_PEOPLE = 12;

/** Across practices by design: only the demo's sign-in page shows it. */
export function listDemoPeople(db: Db): Promise<DemoPerson[]> {
	return db('memberships')
		.join('users', 'users.id', 'memberships.user_id')
		.leftJoin('clients', 'clients.id', 'memberships.client_id')
		.whereNull('memberships.revoked_at')
		.whereNull('users.disabled_at')
		.whereNotNull('users.password_hash')
		.orderByRaw(
			"case memberships.role when 'owner' then 0 when 'checker' then 1 when 'engineer' then 2 else 3 end"
		)
		.orderBy('users.name')
		.limit(MOST_PEOPLE)
		.select(
			'users.name as name',
			'users.email as email',
			'memberships.role as role',
			'clients.name as clientName'
		);
}
