import { setTimeout as sleep } from 'node:timers/promises';
import { normaliseEmail } from '../auth/email-address';
import { hashPassword, needsRehash, verifyPassword } from '../auth/password';
import { hashToken, newToken } from '../auth/tokens';
import { withTransaction } from '../db/database';
import type { UserRow } from '../db/rows';
import { passwordChangedMail, passwordResetMail, signInLinkMail } from '../mail/templates/account-mails';
import { listDemoPeople, type DemoPerson } from '../read-models/demo-people';
import { placesOfUser } from '../read-models/session-actor';
import { sessionsRepository } from '../repositories/sessions.repository';
import { signInTokensRepository } from '../repositories/sign-in-tokens.repository';
import { usersRepository } from '../repositories/users.repository';
import type { ServiceDeps } from '../service-deps';

export const SIGN_IN_LINK_VALID_MIN = 15;
export const PASSWORD_RESET_VALID_MIN = 60;
// Longer than either branch takes, so that the time of an answer does not tell whether an address is known.
const ANSWER_TAKES_MS = 250;

export interface SignedInPerson {
	id: string;
	name: string;
	email: string;
}

const toPerson = (user: UserRow): SignedInPerson => ({ id: user.id, name: user.name, email: user.email });

async function paced(work: Promise<void>): Promise<void> {
	await Promise.all([work, sleep(ANSWER_TAKES_MS)]);
}

/** Ways in for someone who is not signed in. None of them tells whether an address is known. */
export function createSignInService({ db, clock, config, mail, log }: ServiceDeps) {
	const users = usersRepository(db);
	const inMinutes = (minutes: number) => new Date(clock().getTime() + minutes * 60_000).toISOString();

	/** The person, when they may sign in anywhere: enabled, with an open membership. */
	async function admitted(user: UserRow | undefined): Promise<UserRow | null> {
		if (!user || user.disabled_at !== null) return null;
		return (await placesOfUser(db, user.id)).length > 0 ? user : null;
	}

	/** Null for a wrong password, an unknown address, a disabled person and a person without a practice alike. */
	async function withPassword(email: string, password: string): Promise<SignedInPerson | null> {
		const user = await users.byEmail(normaliseEmail(email));
		const hash = user?.password_hash ?? null;
		const matches = await verifyPassword(hash, password);
		const person = await admitted(user);
		if (!person || !matches) return null;
		if (hash !== null && needsRehash(hash))
			await users.setPasswordHash(person.id, await hashPassword(password));
		return toPerson(person);
	}

	async function sendLink(email: string, next: string): Promise<void> {
		const person = await admitted(await users.byEmail(normaliseEmail(email)));
		if (!person) return;
		const token = newToken();
		const href = `${config.origin}/sign-in/confirm?${new URLSearchParams({ token, next })}`;
		await withTransaction(db, async (trx) => {
			await signInTokensRepository(trx).addLink(
				{
					identifier: person.email,
					token_hash: hashToken(token),
					expires_at: inMinutes(SIGN_IN_LINK_VALID_MIN)
				},
				clock().toISOString()
			);
			await mail.queue(trx, {
				template: 'sign-in-link',
				practiceId: null,
				toEmail: person.email,
				toName: person.name,
				...signInLinkMail({ name: person.name, href, validFor_min: SIGN_IN_LINK_VALID_MIN })
			});
		});
	}

	/** Uses the token up, whatever comes of it; null when it is unknown, used, or too old. */
	async function withLink(token: string): Promise<SignedInPerson | null> {
		return withTransaction(db, async (trx) => {
			const tokens = signInTokensRepository(trx);
			const link = await tokens.takeLink(hashToken(token));
			const now = clock().toISOString();
			if (!link || link.expires_at <= now) return null;
			const user = await usersRepository(trx).byEmail(link.identifier);
			if (!user || user.disabled_at !== null || (await placesOfUser(trx, user.id)).length === 0) return null;
			// One way in was used: other links still lying in the mailbox are of no more use.
			await tokens.removeLinksOf(link.identifier);
			await usersRepository(trx).markVerified(user.id, now);
			return toPerson(user);
		});
	}

	async function sendReset(email: string): Promise<void> {
		const person = await admitted(await users.byEmail(normaliseEmail(email)));
		if (!person) return;
		const token = newToken();
		await withTransaction(db, async (trx) => {
			await signInTokensRepository(trx).addReset({
				token_hash: hashToken(token),
				user_id: person.id,
				created_at: clock().toISOString(),
				expires_at: inMinutes(PASSWORD_RESET_VALID_MIN)
			});
			await mail.queue(trx, {
				template: 'password-reset',
				practiceId: null,
				toEmail: person.email,
				toName: person.name,
				...passwordResetMail({
					name: person.name,
					href: `${config.origin}/reset/${token}`,
					validFor_min: PASSWORD_RESET_VALID_MIN
				})
			});
		});
	}

	/** Looks without using up: a link scanner that opens the page burns nothing. */
	async function resetIsOpen(token: string): Promise<boolean> {
		const reset = await signInTokensRepository(db).openReset(hashToken(token), clock().toISOString());
		return reset !== undefined;
	}

	/** Sets the new password, uses the token up and ends every session; null when the token is of no use. */
	async function resetPassword(token: string, password: string): Promise<SignedInPerson | null> {
		const passwordHash = await hashPassword(password);
		return withTransaction(db, async (trx) => {
			const now = clock().toISOString();
			const tokens = signInTokensRepository(trx);
			const reset = await tokens.openReset(hashToken(token), now);
			const user = reset && (await usersRepository(trx).byId(reset.user_id));
			if (!reset || !user || user.disabled_at !== null) return null;
			if (!(await tokens.useReset(reset.token_hash, user.id, now))) return null;
			await usersRepository(trx).setPasswordHash(user.id, passwordHash);
			await usersRepository(trx).markVerified(user.id, now);
			await sessionsRepository(trx).removeOfUser(user.id);
			await tokens.removeLinksOf(user.email);
			await mail.queue(trx, {
				template: 'password-changed',
				practiceId: null,
				toEmail: user.email,
				toName: user.name,
				...passwordChangedMail({ name: user.name, when: now, resetHref: `${config.origin}/forgotten` })
			});
			log.info({ userId: user.id }, 'password reset');
			return toPerson(user);
		});
	}

	/** Whom one can be in the demo; in every other mode nobody is told who is here. */
	async function demoPeople(): Promise<DemoPerson[]> {
		return config.mode === 'demo' ? listDemoPeople(db) : [];
	}

	return {
		demoPeople,
		withPassword,
		withLink,
		requestLink: (email: string, next: string) => paced(sendLink(email, next)),
		requestReset: (email: string) => paced(sendReset(email)),
		resetIsOpen,
		resetPassword
	};
}
