import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { hashToken } from '$lib/server/auth/tokens';
import {
	issuedReport,
	NOW,
	openWorld,
	personOf,
	practiceWithOwner,
	type World
} from '../support/practice-world';

let world: World;
let owner: Actor;
let engineer: Actor;
let clientId: string;
let stranger: Actor;
let strangersClient: string;
beforeEach(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Alder');
	engineer = await personOf(world.db, owner.practiceId, 'Alder', 'Ed Marsh', 'engineer', null);
	clientId = (await issuedReport(world.db, owner, 'Millbrook')).clientId;
	stranger = await practiceWithOwner(world.db, 'Birch');
	strangersClient = (await issuedReport(world.db, stranger, 'Fernside')).clientId;
});
afterEach(() => world.close());

const people = () => world.container.services.people;
const invitations = () => world.container.services.invitations;
const noor = { email: 'Noor.Vale@Example.com', name: 'Noor Vale' };
const joining = { name: 'Noor Vale', password: 'words in a long row' };

async function lastToken(): Promise<string> {
	// The clock stands still, so the newest mail is the last one written.
	const mails = await world.db('mail_outbox').where({ template: 'invitation' }).orderByRaw('rowid desc');
	return mails[0]!.text.match(/https:\/\/pq\.example\/invitation\/([\w-]{43})/)![1]!;
}

describe('inviting', () => {
	it('sends a mail whose link is built from our own address; the token is stored as a hash', async () => {
		await people().invite(owner, { ...noor, role: 'checker', clientId: null });
		const token = await lastToken();
		const rows = await world.db('invitations').select('*');
		expect(rows).toMatchObject([{ email: 'noor.vale@example.com', token_hash: hashToken(token) }]);
		expect(JSON.stringify(rows)).not.toContain(token);
	});

	it("is the owner's for staff; everyone who keeps the register may invite people of clients", async () => {
		for (const role of ['owner', 'engineer', 'checker'] as const)
			await expect(people().invite(engineer, { ...noor, role, clientId: null })).rejects.toMatchObject({
				code: 'forbidden'
			});
		await people().inviteClientPerson(engineer, { ...noor, clientId });
		expect(await world.db('invitations').select('role', 'client_id')).toEqual([
			{ role: 'client', client_id: clientId }
		]);
		const sam = await personOf(world.db, owner.practiceId, 'Alder', 'Sam', 'client', clientId);
		await expect(people().inviteClientPerson(sam, { ...noor, clientId })).rejects.toMatchObject({
			code: 'forbidden'
		});
	});

	it("knows no other practice's clients", async () => {
		await expect(
			people().inviteClientPerson(owner, { ...noor, clientId: strangersClient })
		).rejects.toMatchObject({ code: 'not-found' });
	});

	it('refuses a client without organisation and staff with one', async () => {
		await expect(people().invite(owner, { ...noor, role: 'client', clientId: null })).rejects.toMatchObject({
			code: 'invalid'
		});
		await expect(people().invite(owner, { ...noor, role: 'engineer', clientId })).rejects.toMatchObject({
			code: 'invalid'
		});
	});

	it('refuses who is a member or invited already', async () => {
		await expect(
			people().invite(owner, { email: engineer.email, name: 'Ed', role: 'checker', clientId: null })
		).rejects.toMatchObject({ code: 'conflict' });
		await people().invite(owner, { ...noor, role: 'checker', clientId: null });
		await expect(people().invite(owner, { ...noor, role: 'checker', clientId: null })).rejects.toMatchObject({
			code: 'conflict'
		});
	});
});

describe('accepting', () => {
	it('makes a member once; looking at the page uses nothing up', async () => {
		await people().invite(owner, { ...noor, role: 'checker', clientId: null });
		const token = await lastToken();
		expect(await invitations().open(token)).toMatchObject({ practiceName: 'Alder', hasAccount: false });
		expect(await invitations().open(token)).not.toBeNull();
		expect(await invitations().accept(token, joining)).toEqual({
			ok: true,
			value: { email: 'noor.vale@example.com' }
		});
		expect(await invitations().open(token)).toBeNull();
		expect(await invitations().accept(token, joining)).toMatchObject({ ok: false });
		expect(await world.container.services.signIn.withPassword(noor.email, joining.password)).not.toBeNull();
	});

	it('ends after seven days, and with withdrawal', async () => {
		const id = await people().invite(owner, { ...noor, role: 'checker', clientId: null });
		const token = await lastToken();
		world.setNow(new Date(Date.parse(NOW) + 7 * 86_400_000 + 1000).toISOString());
		expect(await invitations().accept(token, joining)).toMatchObject({ problem: { code: 'of-no-use' } });
		await people().resendInvitation(owner, id);
		const renewed = await lastToken();
		expect(await invitations().open(token)).toBeNull();
		expect(await invitations().open(renewed)).not.toBeNull();
		await people().revokeInvitation(owner, id);
		expect(await invitations().accept(renewed, joining)).toMatchObject({ ok: false });
	});

	it('asks somebody with an account for its password, and changes neither it nor the name', async () => {
		await people().invite(owner, { ...noor, role: 'checker', clientId: null });
		await invitations().accept(await lastToken(), joining);
		await people().invite(stranger, { ...noor, role: 'engineer', clientId: null });
		const token = await lastToken();
		expect(await invitations().open(token)).toMatchObject({ hasAccount: true });
		expect(
			await invitations().accept(token, { name: 'Mallory', password: 'chosen by a thief' })
		).toMatchObject({
			problem: { code: 'wrong-password' }
		});
		expect(await invitations().accept(token, { name: 'Mallory', password: joining.password })).toMatchObject({
			ok: true
		});
		expect(await world.db('users').where({ email: 'noor.vale@example.com' }).first()).toMatchObject({
			name: 'Noor Vale'
		});
	});

	it('opens an ended membership again, in the role now given', async () => {
		await people().revokeMembership(owner, engineer.membershipId);
		await people().invite(owner, {
			email: engineer.email,
			name: engineer.name,
			role: 'checker',
			clientId: null
		});
		await invitations().accept(await lastToken(), joining);
		expect(await world.db('memberships').where({ id: engineer.membershipId }).first()).toMatchObject({
			role: 'checker',
			revoked_at: null
		});
	});
});

describe('roles and leaving', () => {
	it('changes a role at once, and writes it into the history', async () => {
		await people().changeRole(owner, engineer.membershipId, 'checker');
		expect(await world.db('memberships').where({ id: engineer.membershipId }).first()).toMatchObject({
			role: 'checker'
		});
		const event = await world.db('audit_events').where({ action: 'person.role-changed' }).first();
		expect(JSON.parse(event!.detail_json)).toMatchObject({ from: 'engineer', to: 'checker' });
	});

	it('never leaves a practice without an owner', async () => {
		await expect(people().changeRole(owner, owner.membershipId, 'engineer')).rejects.toMatchObject({
			code: 'conflict'
		});
		await expect(people().revokeMembership(owner, owner.membershipId)).rejects.toMatchObject({
			code: 'conflict'
		});
		expect(await world.db('memberships').where({ id: owner.membershipId }).first()).toMatchObject({
			role: 'owner',
			revoked_at: null
		});
		await people().changeRole(owner, engineer.membershipId, 'owner');
		await people().revokeMembership(owner, owner.membershipId);
	});

	it('ends the sessions of who is removed', async () => {
		await world.db('sessions').insert({
			token_hash: 'x',
			user_id: engineer.userId,
			membership_id: engineer.membershipId,
			created_at: NOW,
			last_seen_at: NOW,
			expires_at: '2030-01-01T00:00:00.000Z'
		});
		await people().revokeMembership(owner, engineer.membershipId);
		expect(await world.db('sessions').select('*')).toHaveLength(0);
	});

	it('makes no consultant of a client, nor a client of a consultant', async () => {
		const sam = await personOf(world.db, owner.practiceId, 'Alder', 'Sam', 'client', clientId);
		await expect(people().changeRole(owner, sam.membershipId, 'engineer')).rejects.toMatchObject({
			code: 'invalid'
		});
		await expect(people().changeRole(owner, engineer.membershipId, 'client')).rejects.toMatchObject({
			code: 'invalid'
		});
	});

	it('touches nobody of another practice, and belongs to the owner alone', async () => {
		const id = await people().invite(stranger, { ...noor, role: 'checker', clientId: null });
		const notFound = { code: 'not-found' };
		await expect(people().changeRole(owner, stranger.membershipId, 'engineer')).rejects.toMatchObject(
			notFound
		);
		await expect(people().revokeMembership(owner, stranger.membershipId)).rejects.toMatchObject(notFound);
		await expect(people().revokeInvitation(owner, id)).rejects.toMatchObject(notFound);
		await expect(people().resendInvitation(owner, id)).rejects.toMatchObject(notFound);
		await expect(people().list(engineer)).rejects.toMatchObject({ code: 'forbidden' });
		const seen = await people().list(owner);
		expect(JSON.stringify(seen)).not.toMatch(/Birch|Fernside|noor/i);
		expect(seen.members.map(({ name }) => name)).toEqual(['owner-of-Alder', 'Ed Marsh']);
	});
});
