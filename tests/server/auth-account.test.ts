import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { hashPassword } from '$lib/server/auth/password';
import { knexAdapter } from '$lib/server/auth/knex-adapter';
import { hashToken } from '$lib/server/auth/tokens';
import { NOW, openWorld, personOf, practiceWithOwner, type World } from '../support/practice-world';

let world: World;
let owner: Actor;
beforeEach(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Alder');
});
afterEach(() => world.close());

const account = () => world.container.services.account;
const laterBy = (minutes: number) => world.setNow(new Date(Date.parse(NOW) + minutes * 60_000).toISOString());

async function signedIn(actor: Actor, token: string): Promise<string> {
	const adapter = knexAdapter({ db: world.db, clock: world.container.clock, userAgent: `Browser ${token}` });
	await adapter.createSession!({
		sessionToken: token,
		userId: actor.userId,
		expires: new Date(Date.parse(NOW) + 86_400_000)
	});
	return hashToken(token);
}

describe('who acts in a session', () => {
	it('is the person in their first open practice, with role and client', async () => {
		const session = await signedIn(owner, 'a');
		expect((await account().actorOfSession(session))?.actor).toEqual(owner);
		expect(await account().actorOfSession(hashToken('unknown'))).toBeNull();
	});

	it('is nobody from the moment the membership is revoked, the person disabled or the session over', async () => {
		const session = await signedIn(owner, 'a');
		await world.db('memberships').where({ id: owner.membershipId }).update({ revoked_at: NOW });
		expect(await account().actorOfSession(session)).toBeNull();
		await world.db('memberships').where({ id: owner.membershipId }).update({ revoked_at: null });
		await world.db('users').where({ id: owner.userId }).update({ disabled_at: NOW });
		expect(await account().actorOfSession(session)).toBeNull();
		await world.db('users').where({ id: owner.userId }).update({ disabled_at: null });
		expect(await account().actorOfSession(session)).not.toBeNull();
		laterBy(24 * 60 + 1);
		expect(await account().actorOfSession(session)).toBeNull();
	});

	it('changes to another practice of the same person only', async () => {
		const birch = await practiceWithOwner(world.db, 'Birch');
		const guest = await personOf(world.db, birch.practiceId, 'Birch', owner.name, 'engineer', null);
		expect(guest.userId).toBe(owner.userId);
		const session = await signedIn(owner, 'a');
		await account().actorOfSession(session);
		await expect(account().choosePlace(owner, session, birch.membershipId)).rejects.toMatchObject({
			code: 'not-found'
		});
		await account().choosePlace(owner, session, guest.membershipId);
		expect((await account().actorOfSession(session))?.actor).toMatchObject({
			practiceId: birch.practiceId,
			role: 'engineer'
		});
	});

	it('is noted as seen at most every five minutes', async () => {
		const session = await signedIn(owner, 'a');
		const seen = async () => {
			await account().actorOfSession(session);
			return (await world.db('sessions').first())?.last_seen_at;
		};
		laterBy(4);
		expect(await seen()).toBe(NOW);
		laterBy(6);
		expect(await seen()).toBe(new Date(Date.parse(NOW) + 6 * 60_000).toISOString());
	});
});

describe('devices', () => {
	it('lists the own ones, and signs out one, but never one of somebody else', async () => {
		const mine = await signedIn(owner, 'a');
		const other = await signedIn(owner, 'b');
		const birch = await practiceWithOwner(world.db, 'Birch');
		const foreign = await signedIn(birch, 'c');
		const devices = await account().devices(owner, mine);
		expect(devices.map(({ id, current }) => [id, current])).toEqual(
			expect.arrayContaining([
				[mine, true],
				[other, false]
			])
		);
		expect(devices).toHaveLength(2);
		await expect(account().signOutDevice(owner, foreign)).rejects.toMatchObject({ code: 'not-found' });
		expect(await account().actorOfSession(foreign)).not.toBeNull();
		await account().signOutDevice(owner, other);
		expect(await account().actorOfSession(other)).toBeNull();
		expect(await account().actorOfSession(mine)).not.toBeNull();
	});

	it('are all signed out everywhere, and nobody else is', async () => {
		const sessions = [await signedIn(owner, 'a'), await signedIn(owner, 'b')];
		const foreign = await signedIn(await practiceWithOwner(world.db, 'Birch'), 'c');
		await account().signOutEverywhere(owner);
		for (const session of sessions) expect(await account().actorOfSession(session)).toBeNull();
		expect(await account().actorOfSession(foreign)).not.toBeNull();
	});
});

describe('own password', () => {
	it('changes with the present one only, and signs the other devices out', async () => {
		await world.db('users').update({ password_hash: await hashPassword('the present one') });
		const mine = await signedIn(owner, 'a');
		const other = await signedIn(owner, 'b');
		await expect(account().changePassword(owner, mine, 'wrong', 'the coming one')).rejects.toMatchObject({
			code: 'invalid'
		});
		expect(await account().actorOfSession(other)).not.toBeNull();
		await account().changePassword(owner, mine, 'the present one', 'the coming one');
		expect(await account().actorOfSession(mine)).not.toBeNull();
		expect(await account().actorOfSession(other)).toBeNull();
		const { signIn } = world.container.services;
		expect(await signIn.withPassword(owner.email, 'the coming one')).not.toBeNull();
		expect(JSON.stringify(await world.db('audit_events').select('*'))).not.toContain('the coming one');
	});
});
