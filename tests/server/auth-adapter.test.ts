import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { knexAdapter } from '$lib/server/auth/knex-adapter';
import { hashToken, newToken } from '$lib/server/auth/tokens';
import { NOW, openWorld, practiceWithOwner, type World } from '../support/practice-world';

let world: World;
let owner: Actor;
let adapter: ReturnType<typeof knexAdapter>;
beforeEach(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Alder');
	adapter = knexAdapter({ db: world.db, clock: world.container.clock, userAgent: 'Test browser' });
});
afterEach(() => world.close());

const inHours = (hours: number) => new Date(Date.parse(NOW) + hours * 3_600_000);
const open = (sessionToken: string, hours = 1) =>
	adapter.createSession!({ sessionToken, userId: owner.userId, expires: inHours(hours) });

describe('session adapter', () => {
	it('gives a token back plain and keeps only its hash', async () => {
		const token = newToken();
		expect((await open(token)).sessionToken).toBe(token);
		const rows = await world.db('sessions').select('*');
		expect(rows).toHaveLength(1);
		expect(JSON.stringify(rows)).not.toContain(token);
		expect(rows[0]).toMatchObject({ token_hash: hashToken(token), user_agent: 'Test browser' });
		expect((await adapter.getSessionAndUser!(token))?.user.email).toBe(owner.email);
	});

	it('does not take the stored hash for a token', async () => {
		const token = newToken();
		await open(token);
		expect(await adapter.getSessionAndUser!(hashToken(token))).toBeNull();
	});

	it('finds no session that has run out, been deleted, or belongs to a disabled person', async () => {
		await open('runs-out', 1);
		await open('deleted', 5);
		await open('disabled', 5);
		await adapter.deleteSession!('deleted');
		world.setNow(inHours(2).toISOString());
		expect(await adapter.getSessionAndUser!('runs-out')).toBeNull();
		expect(await adapter.getSessionAndUser!('deleted')).toBeNull();
		expect(await adapter.getSessionAndUser!('disabled')).not.toBeNull();
		await world.db('users').where({ id: owner.userId }).update({ disabled_at: NOW });
		expect(await adapter.getSessionAndUser!('disabled')).toBeNull();
	});

	it('lets a session be extended', async () => {
		await open('long', 1);
		await adapter.updateSession!({ sessionToken: 'long', expires: inHours(48) });
		world.setNow(inHours(24).toISOString());
		expect(await adapter.getSessionAndUser!('long')).not.toBeNull();
	});

	it('uses a verification token once, and only for the address it was made for', async () => {
		const made = { identifier: owner.email, expires: inHours(1) };
		await adapter.createVerificationToken!({ ...made, token: 'one' });
		await adapter.createVerificationToken!({ ...made, token: 'two' });
		expect(JSON.stringify(await world.db('verification_tokens').select('*'))).not.toContain('"one"');
		expect(await adapter.useVerificationToken!({ identifier: owner.email, token: 'one' })).toMatchObject(
			made
		);
		expect(await adapter.useVerificationToken!({ identifier: owner.email, token: 'one' })).toBeNull();
		expect(await adapter.useVerificationToken!({ identifier: 'x@example.com', token: 'two' })).toBeNull();
	});

	it('creates nobody: people come by invitation', async () => {
		expect(() => adapter.createUser!({ id: 'new', email: 'new@example.com', emailVerified: null })).toThrow(
			/invitation/
		);
	});
});
