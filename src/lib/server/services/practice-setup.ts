import type { Role } from '../../access/access';
import { DEFAULT_PHASE_NAMES } from '../../recording/phase';
import { normaliseEmail } from '../auth/email-address';
import type { Db } from '../db/database';
import { newId } from '../db/ids';

export interface NewPractice {
	name: string;
	shortName: string;
	/** First part of every report number. */
	reportPrefix: string;
	timeZone: string;
	address?: string;
	email?: string;
	phone?: string;
	relianceStatement?: string;
}

/** Opens a practice. Runs from the command line only: nobody can open one through the web. */
export async function addPractice(trx: Db, practice: NewPractice, now: Date): Promise<string> {
	const id = newId();
	await trx('practices').insert({
		id,
		name: practice.name,
		short_name: practice.shortName,
		report_prefix: practice.reportPrefix,
		time_zone: practice.timeZone,
		address: practice.address ?? '',
		email: practice.email ?? '',
		phone: practice.phone ?? '',
		reliance_statement: practice.relianceStatement ?? '',
		phase_names_json: JSON.stringify(DEFAULT_PHASE_NAMES),
		created_at: now.toISOString()
	});
	return id;
}

/** A person in a practice; one who is known already gets one more membership. Without a hash they sign in by link. */
export async function addPerson(
	trx: Db,
	person: {
		practiceId: string;
		name: string;
		email: string;
		role: Role;
		clientId: string | null;
		passwordHash: string | null;
	},
	now: Date
): Promise<{ userId: string; membershipId: string }> {
	const email = normaliseEmail(person.email);
	const known = await trx('users').where({ email }).first('id');
	const userId = known?.id ?? newId();
	if (!known)
		await trx('users').insert({
			id: userId,
			email,
			name: person.name,
			password_hash: person.passwordHash,
			email_verified_at: now.toISOString(),
			created_at: now.toISOString()
		});
	const membershipId = newId();
	await trx('memberships').insert({
		id: membershipId,
		user_id: userId,
		practice_id: person.practiceId,
		role: person.role,
		client_id: person.clientId,
		created_at: now.toISOString()
	});
	return { userId, membershipId };
}
