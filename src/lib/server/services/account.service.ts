import type { Actor } from '../../access/access';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { hashPassword, verifyPassword } from '../auth/password';
import { requirePermission } from '../auth/require-permission';
import { withTransaction } from '../db/database';
import { passwordChangedMail } from '../mail/templates/account-mails';
import { placesOfUser, type Place } from '../read-models/session-actor';
import { sessionsRepository } from '../repositories/sessions.repository';
import { usersRepository } from '../repositories/users.repository';
import type { ServiceDeps } from '../service-deps';

// A write on every request would make every page wait for the database's only writer.
const SEEN_EVERY_MS = 5 * 60_000;

export interface Device {
	id: string;
	userAgent: string;
	createdAt: string;
	lastSeenAt: string;
	current: boolean;
}

/** A signed-in person's own matters: who they are in this session, name, password, devices. */
export function createAccountService({ db, clock, config, mail }: ServiceDeps) {
	/**
	 * Who acts in a session: the membership chosen in it, else the first open one. Null when the session is gone
	 * or the person has no open membership left. Asked on every request, so access ends with the next one.
	 */
	async function actorOfSession(tokenHash: string): Promise<Place | null> {
		const sessions = sessionsRepository(db);
		const session = await sessions.byHash(tokenHash);
		const now = clock();
		if (!session || session.expires_at <= now.toISOString()) return null;
		const places = await placesOfUser(db, session.user_id);
		const place = places.find(({ actor }) => actor.membershipId === session.membership_id) ?? places[0];
		if (!place) return null;
		if (place.actor.membershipId !== session.membership_id)
			await sessions.chooseMembership(tokenHash, place.actor.membershipId);
		if (now.getTime() - Date.parse(session.last_seen_at) > SEEN_EVERY_MS) await sessions.seen(tokenHash, now);
		return place;
	}

	async function places(actor: Actor): Promise<Place[]> {
		requirePermission(actor, 'account.manage');
		return placesOfUser(db, actor.userId);
	}

	async function choosePlace(actor: Actor, tokenHash: string, membershipId: string): Promise<Place> {
		requirePermission(actor, 'account.manage');
		const place = requireFound(
			(await placesOfUser(db, actor.userId)).find((each) => each.actor.membershipId === membershipId),
			'practice'
		);
		await sessionsRepository(db).chooseMembership(tokenHash, membershipId);
		return place;
	}

	async function profile(actor: Actor): Promise<{ name: string; email: string; hasPassword: boolean }> {
		requirePermission(actor, 'account.manage');
		const user = requireFound(await usersRepository(db).byId(actor.userId), 'person');
		return { name: user.name, email: user.email, hasPassword: user.password_hash !== null };
	}

	async function rename(actor: Actor, name: string): Promise<void> {
		requirePermission(actor, 'account.manage');
		await withTransaction(db, async (trx) => {
			await usersRepository(trx).rename(actor.userId, name);
			await appendAudit(
				trx,
				actor,
				{
					action: 'person.renamed',
					subjectKind: 'user',
					subjectId: actor.userId,
					detail: { from: actor.name, to: name }
				},
				clock()
			);
		});
	}

	/** Ends every other session: whoever had the old password is out. */
	async function changePassword(
		actor: Actor,
		tokenHash: string,
		current: string,
		wanted: string
	): Promise<void> {
		requirePermission(actor, 'account.manage');
		const user = requireFound(await usersRepository(db).byId(actor.userId), 'person');
		if (user.password_hash !== null && !(await verifyPassword(user.password_hash, current)))
			throw new AppError('invalid', 'This is not your present password. Enter it again.');
		const passwordHash = await hashPassword(wanted);
		await withTransaction(db, async (trx) => {
			await usersRepository(trx).setPasswordHash(actor.userId, passwordHash);
			await sessionsRepository(trx).removeOfUser(actor.userId, tokenHash);
			await appendAudit(
				trx,
				actor,
				{ action: 'person.password-changed', subjectKind: 'user', subjectId: actor.userId },
				clock()
			);
			await mail.queue(trx, {
				template: 'password-changed',
				practiceId: null,
				toEmail: user.email,
				toName: user.name,
				...passwordChangedMail({
					name: user.name,
					when: clock().toISOString(),
					resetHref: `${config.origin}/forgotten`
				})
			});
		});
	}

	/** The id of a device is the hash of its token; it opens nothing. */
	async function devices(actor: Actor, currentHash: string | null): Promise<Device[]> {
		requirePermission(actor, 'account.manage');
		const rows = await sessionsRepository(db).ofUser(actor.userId, clock());
		return rows.map((row) => ({
			id: row.token_hash,
			userAgent: row.user_agent,
			createdAt: row.created_at,
			lastSeenAt: row.last_seen_at,
			current: row.token_hash === currentHash
		}));
	}

	async function signOutDevice(actor: Actor, deviceId: string): Promise<void> {
		requirePermission(actor, 'account.manage');
		const removed = await sessionsRepository(db).removeOneOfUser(actor.userId, deviceId);
		if (removed === 0) throw new AppError('not-found', 'This device is signed out already.');
	}

	async function signOutEverywhere(actor: Actor): Promise<void> {
		requirePermission(actor, 'account.manage');
		await withTransaction(db, async (trx) => {
			const ended = await sessionsRepository(trx).removeOfUser(actor.userId);
			await appendAudit(
				trx,
				actor,
				{
					action: 'person.signed-out-everywhere',
					subjectKind: 'user',
					subjectId: actor.userId,
					detail: { sessions: ended }
				},
				clock()
			);
		});
	}

	return {
		actorOfSession,
		endSession: (tokenHash: string) => sessionsRepository(db).remove(tokenHash),
		places,
		choosePlace,
		profile,
		rename,
		changePassword,
		devices,
		signOutDevice,
		signOutEverywhere
	};
}
