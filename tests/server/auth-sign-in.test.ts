import { hash } from '@node-rs/argon2';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { hashPassword, needsRehash, verifyPassword } from '$lib/server/auth/password';
import { knexAdapter } from '$lib/server/auth/knex-adapter';
import { NOW, openWorld, practiceWithOwner, type World } from '../support/practice-world';

const PASSWORD = 'a rather long password';
let world: World;
let owner: Actor;
beforeEach(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Alder');
	await setHash(await hashPassword(PASSWORD));
});
afterEach(() => world.close());

const signIn = () => world.container.services.signIn;
const later = (minutes: number) => world.setNow(new Date(Date.parse(NOW) + minutes * 60_000).toISOString());
const setHash = (password_hash: string | null) =>
	world.db('users').where({ id: owner.userId }).update({ password_hash });

async function mailedPath(pattern: RegExp): Promise<string> {
	const mail = await world.db('mail_outbox').orderBy('created_at', 'desc').first();
	const found = mail?.text.match(pattern)?.[1];
	if (!found) throw new Error('no such link in the last mail');
	return found;
}
async function mailedLinkToken(): Promise<string> {
	await signIn().requestLink(owner.email, '/surveys');
	return mailedPath(/token=([\w-]+)/);
}
async function mailedResetToken(): Promise<string> {
	await signIn().requestReset(owner.email);
	return mailedPath(/\/reset\/([\w-]+)/);
}

describe('password', () => {
	it('lets in with the right password, however the address is written', async () => {
		expect(await signIn().withPassword(` ${owner.email.toUpperCase()} `, PASSWORD)).toMatchObject({
			id: owner.userId
		});
	});

	it('answers the same for a wrong password, an unknown address, a disabled person and one without practice', async () => {
		expect(await signIn().withPassword(owner.email, 'wrong')).toBeNull();
		expect(await signIn().withPassword('nobody@example.com', PASSWORD)).toBeNull();
		await world.db('memberships').where({ id: owner.membershipId }).update({ revoked_at: NOW });
		expect(await signIn().withPassword(owner.email, PASSWORD)).toBeNull();
		await world.db('memberships').where({ id: owner.membershipId }).update({ revoked_at: null });
		await world.db('users').where({ id: owner.userId }).update({ disabled_at: NOW });
		expect(await signIn().withPassword(owner.email, PASSWORD)).toBeNull();
	});

	it('takes a comparable time for an unknown address: the same hash function runs', async () => {
		const timed = async (email: string) => {
			const times_ms = [];
			for (let i = 0; i < 7; i++) {
				const start_ms = performance.now();
				await signIn().withPassword(email, 'wrong');
				times_ms.push(performance.now() - start_ms);
			}
			return times_ms.sort((a, b) => a - b)[3]!;
		};
		await signIn().withPassword('nobody@example.com', 'wrong');
		const ratio = (await timed('nobody@example.com')) / (await timed(owner.email));
		// argon2id takes tens of milliseconds and the rest under one: without the decoy the ratio is below 0.1.
		expect(ratio).toBeGreaterThan(0.4);
		expect(ratio).toBeLessThan(2.5);
	});

	it('never matches the decoy that stands in for a missing hash', async () => {
		expect(await verifyPassword(null, 'nobody signs in with this')).toBe(false);
	});

	it('makes an old hash anew at the next sign-in', async () => {
		const old = await hash(PASSWORD, { memoryCost: 8192, timeCost: 1, parallelism: 1 });
		await setHash(old);
		expect(needsRehash(old)).toBe(true);
		expect(await signIn().withPassword(owner.email, PASSWORD)).not.toBeNull();
		const row = await world.db('users').where({ id: owner.userId }).first();
		expect(row?.password_hash).not.toBe(old);
		expect(needsRehash(row?.password_hash ?? '')).toBe(false);
	});
});

describe('sign-in link', () => {
	it('is built from our own address and carries the way on', async () => {
		await signIn().requestLink(owner.email, '/surveys?page=2');
		const mail = await world.db('mail_outbox').first();
		expect(mail?.to_email).toBe(owner.email);
		expect(mail?.text).toMatch(
			/^https:\/\/pq\.example\/sign-in\/confirm\?token=[\w-]{43}&next=%2Fsurveys%3Fpage%3D2$/m
		);
	});

	it('works once', async () => {
		const token = await mailedLinkToken();
		expect(JSON.stringify(await world.db('verification_tokens').select('*'))).not.toContain(token);
		expect(await signIn().withLink(token)).toMatchObject({ id: owner.userId });
		expect(await signIn().withLink(token)).toBeNull();
	});

	it('works once even for two that come at the same moment', async () => {
		const token = await mailedLinkToken();
		const both = await Promise.all([signIn().withLink(token), signIn().withLink(token)]);
		expect(both.filter((person) => person !== null)).toHaveLength(1);
	});

	it('ends after a quarter of an hour', async () => {
		const token = await mailedLinkToken();
		later(14.9);
		const second = await mailedLinkToken();
		later(15.1);
		expect(await signIn().withLink(token)).toBeNull();
		expect(await signIn().withLink(second)).not.toBeNull();
	});

	it('is of no use once access has ended', async () => {
		const token = await mailedLinkToken();
		await world.db('memberships').where({ id: owner.membershipId }).update({ revoked_at: NOW });
		expect(await signIn().withLink(token)).toBeNull();
	});

	it('is not sent to an address nobody has, and the answer takes as long', async () => {
		const start_ms = performance.now();
		expect(await signIn().requestLink('nobody@example.com', '/')).toBeUndefined();
		expect(performance.now() - start_ms).toBeGreaterThan(200);
		expect(await signIn().requestReset('nobody@example.com')).toBeUndefined();
		expect(await world.db('mail_outbox').select('id')).toHaveLength(0);
	});
});

describe('password reset', () => {
	it('sets the password once, ends every session and says so by mail', async () => {
		const adapter = knexAdapter({ db: world.db, clock: world.container.clock, userAgent: '' });
		await adapter.createSession!({
			sessionToken: 'old',
			userId: owner.userId,
			expires: new Date('2030-01-01')
		});
		const token = await mailedResetToken();
		expect(await signIn().resetIsOpen(token)).toBe(true);
		expect(await signIn().resetIsOpen(token)).toBe(true);

		expect(await signIn().resetPassword(token, 'an entirely new one')).toMatchObject({ id: owner.userId });
		expect(await world.db('sessions').select('*')).toHaveLength(0);
		expect(await signIn().withPassword(owner.email, PASSWORD)).toBeNull();
		expect(await signIn().withPassword(owner.email, 'an entirely new one')).not.toBeNull();
		expect(await signIn().resetIsOpen(token)).toBe(false);
		expect(await signIn().resetPassword(token, 'a third password')).toBeNull();
		const mails = await world.db('mail_outbox').select('template');
		expect(mails.map(({ template }) => template)).toContain('password-changed');
	});

	it('closes the other open resets of the person', async () => {
		const first = await mailedResetToken();
		await world.db('mail_outbox').delete();
		const second = await mailedResetToken();
		await signIn().resetPassword(second, 'an entirely new one');
		expect(await signIn().resetPassword(first, 'by an older mail')).toBeNull();
	});

	it('ends after an hour', async () => {
		const token = await mailedResetToken();
		later(61);
		expect(await signIn().resetIsOpen(token)).toBe(false);
		expect(await signIn().resetPassword(token, 'an entirely new one')).toBeNull();
	});
});

describe('list of demo sign-ins', () => {
	it('is told in the demo and in no other mode', async () => {
		expect(await signIn().demoPeople()).toEqual([]);
		world.container.config.mode = 'production';
		expect(await signIn().demoPeople()).toEqual([]);
		world.container.config.mode = 'demo';
		expect(await signIn().demoPeople()).toMatchObject([{ email: owner.email, role: 'owner' }]);
	});
});
