import type { Db } from '../../db/database';
import type { Scope } from '../../repositories/scope';

export interface Recipient {
	name: string;
	email: string;
}

/** The client's people who can sign in: mail about a report goes to them and to nobody else. */
export async function clientRecipients(db: Db, scope: Scope, clientId: string): Promise<Recipient[]> {
	return db('memberships as m')
		.join('users as u', 'u.id', 'm.user_id')
		.where({ 'm.practice_id': scope.practiceId, 'm.client_id': clientId, 'm.role': 'client' })
		.whereNull('m.revoked_at')
		.whereNull('u.disabled_at')
		.orderBy('u.name')
		.select<Recipient[]>({ name: 'u.name', email: 'u.email' });
}
