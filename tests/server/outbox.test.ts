import { SMTPServer } from 'smtp-server';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openDatabase, withTransaction, type Db } from '$lib/server/db/database';
import { createLog } from '$lib/server/log';
import { createOutbox, type MailMessage } from '$lib/server/mail/outbox';
import { createMailTransport } from '$lib/server/mail/transport';
import { migrationSource } from '../support/test-database';

const MAIL: MailMessage = {
	template: 'test',
	practiceId: null,
	toEmail: 'sam@millbrook.example',
	toName: 'Sam Portman',
	subject: 'Report TH-2026-0001',
	text: 'Plain words.',
	html: '<p>Set words.</p>'
};
const log = createLog('silent', 'script');
let db: Db;
let now: Date;
const clock = (): Date => now;

beforeEach(async () => {
	now = new Date('2026-03-19T09:00:00.000Z');
	db = openDatabase(':memory:');
	await db.migrate.latest({ migrationSource });
});
afterEach(() => db.destroy());

describe('outbox', () => {
	it('tries again later and later, and shows what failed for good', async () => {
		let tries = 0;
		const outbox = createOutbox(
			db,
			async () => {
				tries++;
				throw new Error('mailbox full');
			},
			clock,
			log
		);
		await outbox.queue(db, MAIL);
		const waits: number[] = [];
		for (let i = 0; i < 6; i++) {
			expect(await outbox.deliverDue()).toBe(1);
			const row = (await db('mail_outbox').first())!;
			if (row.status === 'failed') break;
			waits.push((Date.parse(row.next_attempt_at) - now.getTime()) / 1000);
			expect(await outbox.deliverDue(), 'not before its time').toBe(0);
			now = new Date(row.next_attempt_at);
		}
		expect(waits).toEqual([30, 120, 600, 3600, 21_600]);
		expect(await db('mail_outbox').first()).toMatchObject({
			status: 'failed',
			attempts: 6,
			last_error: 'mailbox full'
		});
		expect(tries).toBe(6);
	});

	it('never sends what belongs to a deed that was undone', async () => {
		const sent: string[] = [];
		const outbox = createOutbox(db, async (mail) => void sent.push(mail.id), clock, log);
		await expect(
			withTransaction(db, async (trx) => {
				await outbox.queue(trx, MAIL);
				throw new Error('undone');
			})
		).rejects.toThrow('undone');
		expect(await outbox.deliverDue()).toBe(0);
		expect(sent).toEqual([]);
	});

	it('goes out by SMTP with both forms of its text', async () => {
		const received: { to: string[]; body: string }[] = [];
		const server = new SMTPServer({
			authOptional: true,
			disabledCommands: ['STARTTLS', 'AUTH'],
			onData(stream, session, done) {
				let body = '';
				stream.on('data', (chunk: Buffer) => (body += chunk.toString()));
				stream.on('end', () => {
					received.push({ to: session.envelope.rcptTo.map((rcpt) => rcpt.address), body });
					done();
				});
			}
		});
		await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
		const address = server.server.address();
		const port = typeof address === 'object' && address ? address.port : 0;
		const send = createMailTransport({
			smtpUrl: `smtp://127.0.0.1:${port}`,
			mailFrom: 'Tarn <no-reply@example.com>'
		});
		const outbox = createOutbox(db, send, clock, log);
		await outbox.queue(db, MAIL);
		await outbox.deliverDue();
		await new Promise<void>((resolve) => server.close(() => resolve()));
		expect(await db('mail_outbox').first()).toMatchObject({ status: 'sent', attempts: 1 });
		expect(received).toHaveLength(1);
		expect(received[0]!.to).toEqual(['sam@millbrook.example']);
		expect(received[0]!.body).toMatch(
			/Subject: Report TH-2026-0001[\s\S]*Plain words\.[\s\S]*<p>Set words\.<\/p>/
		);
	});
});
