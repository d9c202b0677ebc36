import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { letterheadSchema } from '$lib/register/letterhead';
import { quotaOf, storageQuotaSchema } from '$lib/register/storage-quota';
import { assertMigrated, pendingMigrations } from '$lib/server/db/pending-migrations';
import { NOW, openWorld, personOf, practiceWithOwner, type World } from '../support/practice-world';

let world: World;
let owner: Actor;
let stranger: Actor;
beforeEach(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Alder');
	stranger = await practiceWithOwner(world.db, 'Birch');
});
afterEach(() => world.close());

const practice = () => world.container.services.practice;
const everyMail = { q: '', sort: 'created', descending: true, page: 1, pageSize: 25, status: null } as const;
const everyEvent = {
	q: '',
	sort: 'at',
	descending: true,
	page: 1,
	pageSize: 25,
	kind: '',
	actorUserId: ''
} as const;

async function mail(to: Actor, status: 'sent' | 'failed'): Promise<string> {
	const id = `mail-${to.name}-${status}`;
	await world.db('mail_outbox').insert({
		id,
		practice_id: to.practiceId,
		template: 'invitation',
		to_email: to.email,
		subject: `To ${to.name}`,
		text: '',
		html: '',
		status,
		attempts: 5,
		next_attempt_at: NOW,
		created_at: NOW,
		last_error: status === 'failed' ? 'mailbox full' : null
	});
	return id;
}

describe('letterhead', () => {
	it('is saved whole, for this practice only, with the differences in the history', async () => {
		const before = await practice().letterhead(owner);
		await practice().saveLetterhead(owner, { ...before, phaseL1: 'R', allowSelfCheck: true });
		expect(await practice().letterhead(owner)).toEqual({ ...before, phaseL1: 'R', allowSelfCheck: true });
		expect(await practice().letterhead(stranger)).toMatchObject({ name: 'Birch', phaseL1: 'L1' });
		const event = await world.db('audit_events').where({ action: 'practice.changed' }).first();
		expect(JSON.parse(event!.detail_json)).toEqual({
			phaseL1: { from: 'L1', to: 'R' },
			allowSelfCheck: { from: false, to: true }
		});
	});

	it('accepts a prefix that fits a report number, and says what to enter otherwise', async () => {
		const given = await practice().letterhead(owner);
		expect(letterheadSchema.parse({ ...given, reportPrefix: ' th ' }).reportPrefix).toBe('TH');
		for (const reportPrefix of ['', 'T-H', 'TOOLONGPREFIX'])
			expect(letterheadSchema.safeParse({ ...given, reportPrefix }).success).toBe(false);
	});

	it('belongs to the owner', async () => {
		const checker = await personOf(world.db, owner.practiceId, 'Alder', 'Cora', 'checker', null);
		await expect(practice().letterhead(checker)).rejects.toMatchObject({ code: 'forbidden' });
		await expect(practice().outbox(checker, everyMail)).rejects.toMatchObject({ code: 'forbidden' });
		await expect(practice().history(checker, everyEvent)).rejects.toMatchObject({ code: 'forbidden' });
	});
});

describe('outgoing mail', () => {
	it("lists the practice's own, with the error, and never the text", async () => {
		await mail(owner, 'failed');
		await mail(stranger, 'failed');
		const { rows, total } = await practice().outbox(owner, everyMail);
		expect(total).toBe(1);
		expect(rows[0]).toMatchObject({ subject: 'To owner-of-Alder', last_error: 'mailbox full' });
		expect(rows[0]).not.toHaveProperty('text');
		expect(rows[0]).not.toHaveProperty('html');
	});

	it('is sent again when it has failed, and only then, and only by its own practice', async () => {
		const failed = await mail(owner, 'failed');
		const sent = await mail(owner, 'sent');
		const foreign = await mail(stranger, 'failed');
		await expect(practice().retryMail(owner, foreign)).rejects.toMatchObject({ code: 'not-found' });
		await expect(practice().retryMail(owner, sent)).rejects.toMatchObject({ code: 'conflict' });
		await practice().retryMail(owner, failed);
		expect(await world.container.mail.deliverDue()).toBe(1);
		expect(await world.db('mail_outbox').where({ id: failed }).first()).toMatchObject({ status: 'sent' });
	});
});

describe('history', () => {
	it('shows the own practice, filtered by kind, person and words', async () => {
		const settings = await practice().letterhead(owner);
		await practice().saveLetterhead(owner, { ...settings, address: '1 Alder Way' });
		await practice().saveLetterhead(stranger, {
			...(await practice().letterhead(stranger)),
			address: '2 Birch Way'
		});
		const all = await practice().history(owner, everyEvent);
		expect(all.page.rows.map(({ actor_name }) => actor_name)).toEqual(['owner-of-Alder']);
		expect(all.choices).toEqual({
			kinds: ['practice'],
			people: [{ id: owner.userId, name: 'owner-of-Alder' }]
		});
		const words = (q: string) => practice().history(owner, { ...everyEvent, q });
		expect((await words('Alder Way')).page.total).toBe(1);
		expect((await words('%')).page.total).toBe(0);
		expect((await practice().history(owner, { ...everyEvent, kind: 'report' })).page.total).toBe(0);
	});

	it('cannot be rewritten', async () => {
		const settings = await practice().letterhead(owner);
		await practice().saveLetterhead(owner, { ...settings, address: '1 Alder Way' });
		await expect(world.db('audit_events').update({ actor_name: 'Nobody' })).rejects.toThrow(/append-only/);
		await expect(world.db('audit_events').delete()).rejects.toThrow(/append-only/);
	});
});

describe('local mailbox', () => {
	it('is found only where mail goes nowhere', async () => {
		const id = await mail(owner, 'sent');
		expect(await world.container.services.mailbox.byId(id)).toMatchObject({ to_email: owner.email });
		world.container.config.mailboxVisible = false;
		await expect(world.container.services.mailbox.list()).rejects.toMatchObject({ code: 'not-found' });
		await expect(world.container.services.mailbox.byId(id)).rejects.toMatchObject({ code: 'not-found' });
	});
});

describe('start', () => {
	it('is refused with a sentence while migrations are missing', async () => {
		const names = (await world.db('knex_migrations').select('name')).map(
			({ name }: { name: string }) => name
		);
		await expect(assertMigrated(world.db, names)).resolves.toBeUndefined();
		expect(await pendingMigrations(world.db, [...names, '29990101_later.ts'])).toEqual(['29990101_later.ts']);
		await expect(assertMigrated(world.db, [...names, '29990101_later.ts'])).rejects.toThrow(
			/npm run migrate/
		);
	});
});

describe('room for originals', () => {
	it('is limited by the practice itself, never beyond what the installation gives, with a line in the history', async () => {
		expect((await practice().storage(owner)).use).toMatchObject({ kept_bytes: 0, quota_bytes: null });
		await practice().setStorageQuota(owner, 200e9);
		expect((await practice().storage(owner)).use).toMatchObject({
			quota_bytes: 200e9,
			ownQuota_bytes: 200e9
		});
		expect((await practice().storage(stranger)).use.quota_bytes).toBeNull();
		const events = await world.db('audit_events').where({ action: 'practice.changed' });
		expect(JSON.parse(events[0]!.detail_json)).toEqual({ storageQuota_bytes: { from: null, to: 200e9 } });
		world.container.config.storageQuota_bytes = 100e9;
		expect((await practice().storage(owner)).use.quota_bytes).toBe(100e9);
		await expect(practice().setStorageQuota(owner, 101e9)).rejects.toThrow(/at most 100 GB/);
		await practice().setStorageQuota(owner, null);
		expect((await practice().storage(owner)).use).toMatchObject({ quota_bytes: 100e9, ownQuota_bytes: null });
	});

	it('is entered in gigabytes as people write them', () => {
		const read = (text: string) => {
			const parsed = storageQuotaSchema.safeParse({ limit_GB: text });
			return parsed.success ? quotaOf(parsed.data.limit_GB) : 'refused';
		};
		expect(['200', ' 1,5 GB', '', '0', 'much'].map(read)).toEqual([200e9, 1.5e9, null, 'refused', 'refused']);
	});
});
