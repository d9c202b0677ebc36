import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import type { AppError } from '$lib/server/app-error';
import { newId } from '$lib/server/db/ids';
import { issuedReport, openWorld, personOf, practiceWithOwner, type World } from '../support/practice-world';

let world: World;
let owner: Actor;
let mine: Awaited<ReturnType<typeof issuedReport>>;
let neighbours: Awaited<ReturnType<typeof issuedReport>>;
let sam: Actor;
let neighbour: Actor;
let stranger: Actor;

beforeEach(async () => {
	world = await openWorld();
	const { db } = world;
	owner = await practiceWithOwner(db, 'Alder');
	mine = await issuedReport(db, owner, 'Millbrook');
	neighbours = await issuedReport(db, owner, 'Fernside');
	sam = await personOf(db, owner.practiceId, 'Alder', 'Sam Portman', 'client', mine.clientId);
	neighbour = await personOf(db, owner.practiceId, 'Alder', 'Ola Fern', 'client', neighbours.clientId);
	stranger = await practiceWithOwner(db, 'Birch');
});
afterEach(() => world.close());

const notFound = { code: 'not-found' } satisfies Partial<AppError>;
const all = { show: 'all', siteId: null, page: 1 } as const;

describe('portal: what a client sees', () => {
	it("lists the organisation's issued reports and nobody else's", async () => {
		const { portal } = world.container.services;
		const { items, total } = await portal.reports(sam, all);
		expect(items.map((item) => item.title)).toEqual(['Report for Millbrook']);
		expect(total).toBe(1);
		expect((await portal.sites(sam)).map((site) => site.name)).toEqual(['Millbrook site']);
	});

	it('has no drafts, not even by their id', async () => {
		const draft = newId();
		const { db, container } = world;
		const issued = await db('report_revisions').where({ id: mine.revisionId }).first();
		await db('report_revisions').insert({
			...issued!,
			id: draft,
			revision: 'B',
			status: 'draft',
			issued_at: null
		});
		await expect(container.services.portal.report(sam, draft)).rejects.toMatchObject(notFound);
		expect((await container.services.portal.reports(sam, all)).total).toBe(1);
	});

	it("answers not-found for a neighbour's report, site and action, as if they did not exist", async () => {
		const { portal } = world.container.services;
		await expect(portal.report(sam, neighbours.revisionId)).rejects.toMatchObject(notFound);
		await expect(portal.site(sam, neighbours.siteId)).rejects.toMatchObject(notFound);
		await expect(portal.acknowledge(sam, neighbours.revisionId, 'Sam Portman', 'r')).rejects.toMatchObject(
			notFound
		);
		await expect(portal.report(neighbour, mine.revisionId)).rejects.toMatchObject(notFound);
	});

	it('is closed to consultants, who have no organisation', async () => {
		await expect(world.container.services.portal.reports(owner, all)).rejects.toMatchObject({
			code: 'forbidden'
		});
	});
});

describe('portal: acknowledgement', () => {
	it('keeps name, moment and the hash of the PDF, and mails a receipt to both sides', async () => {
		const { portal } = world.container.services;
		await portal.acknowledge(sam, mine.revisionId, 'Samuel Portman', 'request-1');
		const report = await portal.report(sam, mine.revisionId);
		expect(report.acknowledgements).toEqual([
			{
				name: 'Sam Portman',
				typedName: 'Samuel Portman',
				at: '2026-03-19T09:30:00.000Z',
				pdfSha256: mine.pdfSha256,
				userId: sam.userId
			}
		]);
		const mails = await world.db('mail_outbox').select('to_email', 'text');
		expect(mails.map((mail) => mail.to_email).sort()).toEqual([owner.email, sam.email].sort());
		for (const mail of mails) expect(mail.text).toContain(mine.pdfSha256);
		const event = await world.db('audit_events').where({ action: 'report.acknowledged' }).first();
		expect(event).toMatchObject({
			actor_user_id: sam.userId,
			subject_id: mine.revisionId,
			request_id: 'request-1'
		});
	});

	it('returns the first when repeated, and sends nothing more', async () => {
		const { portal } = world.container.services;
		const first = await portal.acknowledge(sam, mine.revisionId, 'Sam Portman', 'r1');
		world.setNow('2026-03-20T10:00:00.000Z');
		const second = await portal.acknowledge(sam, mine.revisionId, 'Someone Else', 'r2');
		expect(second).toEqual(first);
		expect(await world.db('acknowledgements')).toHaveLength(1);
		expect(await world.db('mail_outbox')).toHaveLength(2);
	});

	it('is refused for a superseded revision, naming the one that stands', async () => {
		const { db, container } = world;
		const issued = await db('report_revisions').where({ id: mine.revisionId }).first();
		await db('report_revisions').where({ id: mine.revisionId }).update({ status: 'superseded' });
		await db('report_revisions').insert({ ...issued!, id: newId(), revision: 'B', status: 'issued' });
		await expect(
			container.services.portal.acknowledge(sam, mine.revisionId, 'Sam Portman', 'r')
		).rejects.toThrow(/revision B/);
	});
});

describe('portal: questions', () => {
	it('go to the engineer, are answered, and never leave the organisation', async () => {
		const { queries } = world.container.services;
		const id = await queries.ask(sam, mine.revisionId, 'Does this matter in winter?', 'r');
		expect(
			(await queries.list(owner, { status: 'open', page: 1 })).threads.map((thread) => thread.id)
		).toEqual([id]);
		await queries.reply(owner, id, 'Less so: the compressors run at part load.', 'r');
		const thread = await queries.thread(sam, id);
		expect(thread.status).toBe('answered');
		expect(thread.messages.map((message) => message.fromPractice)).toEqual([false, true]);
		expect((await world.db('mail_outbox').orderBy('created_at')).map((mail) => mail.to_email)).toEqual([
			owner.email,
			sam.email
		]);
		await expect(queries.thread(neighbour, id)).rejects.toMatchObject(notFound);
		await expect(queries.reply(neighbour, id, 'What is this about?', 'r')).rejects.toMatchObject(notFound);
		await expect(queries.thread(stranger, id)).rejects.toMatchObject(notFound);
		await expect(queries.ask(neighbour, mine.revisionId, 'May I see it?', 'r')).rejects.toMatchObject(
			notFound
		);
	});

	it('a further message of the client opens it again', async () => {
		const { queries } = world.container.services;
		const id = await queries.ask(sam, mine.revisionId, 'Is it urgent?', 'r');
		await queries.reply(owner, id, 'No, plan it for spring.', 'r');
		await queries.reply(sam, id, 'And if we add a compressor?', 'r');
		expect((await queries.thread(owner, id)).status).toBe('open');
	});
});

describe('portal: actions', () => {
	async function addAction(side: 'client' | 'practice', published: boolean): Promise<string> {
		const id = newId();
		await world.db('actions').insert({
			id,
			practice_id: owner.practiceId,
			client_id: mine.clientId,
			site_id: mine.siteId,
			survey_id: mine.surveyId,
			position: 1,
			title: 'Ask the drive supplier for line reactors',
			priority: 'normal',
			side,
			status: 'open',
			published_at: published ? '2026-03-19T09:30:00.000Z' : null,
			created_at: '2026-03-19T09:30:00.000Z'
		});
		return id;
	}

	it('appear once published; the client reports their own as done', async () => {
		const { portal } = world.container.services;
		const id = await addAction('client', true);
		await addAction('client', false);
		expect((await portal.actions(sam, { status: 'open' })).map((action) => action.id)).toEqual([id]);
		await portal.completeAction(sam, id, 'Reactors fitted on 4 May.', 'r');
		expect(await world.db('actions').where({ id }).first()).toMatchObject({
			status: 'done',
			done_by: sam.userId,
			done_note: 'Reactors fitted on 4 May.'
		});
		await expect(portal.completeAction(neighbour, id, '', 'r')).rejects.toMatchObject(notFound);
	});

	it('are confirmed by the consultant, or opened again', async () => {
		const { portal, actions } = world.container.services;
		const id = await addAction('client', true);
		await portal.completeAction(sam, id, 'Done.', 'r');
		await actions.confirm(owner, mine.surveyId, id);
		expect(await world.db('actions').where({ id }).first()).toMatchObject({
			status: 'confirmed',
			confirmed_by: owner.userId
		});
		await actions.reopen(owner, mine.surveyId, id);
		expect((await portal.actions(sam, { status: 'open' })).map((action) => action.id)).toEqual([id]);
		await expect(actions.confirm(stranger, mine.surveyId, id)).rejects.toMatchObject(notFound);
		await expect(actions.confirm(sam, mine.surveyId, id)).rejects.toMatchObject({ code: 'forbidden' });
	});

	it("the practice's own action is not the client's to complete", async () => {
		const id = await addAction('practice', true);
		await expect(world.container.services.portal.completeAction(sam, id, '', 'r')).rejects.toMatchObject({
			code: 'forbidden'
		});
	});
});
