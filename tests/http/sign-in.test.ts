import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { hashPassword } from '$lib/server/auth/password';
import { personOf, practiceWithOwner } from '../support/practice-world';
import { buildMissing, cookiesOf, startBuiltApp, type BuiltApp } from './built-app';

const PASSWORD = 'a rather long password';
let app: BuiltApp;
let owner: Actor;
let engineer: Actor;

describe.skipIf(buildMissing)(
	'sign-in over HTTP (skipped where build/ is missing: run npm run build)',
	() => {
		beforeAll(async () => {
			app = await startBuiltApp(async (db) => {
				owner = await practiceWithOwner(db, 'Alder');
				engineer = await personOf(db, owner.practiceId, 'Alder', 'Ed Marsh', 'engineer', null);
				await db('users').update({ password_hash: await hashPassword(PASSWORD) });
			});
		});
		afterAll(() => app?.stop());

		const post = (path: string, fields: Record<string, string>, headers: Record<string, string> = {}) =>
			app.request(path, { method: 'POST', body: new URLSearchParams(fields), headers });
		const signIn = (email: string, password = PASSWORD, path = '/sign-in') => post(path, { email, password });
		const lastMail = async () =>
			(await app.db('mail_outbox').orderByRaw('rowid desc').first()) ?? { text: '', html: '', to_email: '' };

		it('opens the page that was asked for', async () => {
			const asked = await app.request('/profile');
			expect(asked.status).toBe(303);
			expect(asked.headers.get('location')).toBe('/sign-in?next=%2Fprofile');
			const done = await signIn(owner.email, PASSWORD, '/sign-in?next=%2Fprofile');
			expect([done.status, done.headers.get('location')]).toEqual([303, '/profile']);
			const page = await app.request('/profile', { as: cookiesOf(done) });
			expect(page.status).toBe(200);
			expect(await page.text()).toContain(owner.email);
		});

		it('sets a cookie that scripts cannot read and other sites cannot use', async () => {
			const done = await signIn(owner.email);
			const cookie = done.headers.getSetCookie().find((each) => each.startsWith('sinewright.session='));
			expect(cookie).toMatch(/HttpOnly/i);
			expect(cookie).toMatch(/SameSite=Lax/i);
			expect(cookiesOf(done)).not.toContain('authjs');
		});

		it('follows no address of another site', async () => {
			for (const next of ['https://evil.example/', '//evil.example/', '/\\evil.example']) {
				const done = await signIn(owner.email, PASSWORD, `/sign-in?${new URLSearchParams({ next })}`);
				expect(done.headers.get('location')).toBe('/');
			}
		});

		it('says the same for a wrong password and an unknown address', async () => {
			const bodies = [];
			for (const [email, password] of [
				[engineer.email, 'wrong'],
				['nobody@example.com', PASSWORD]
			] as const) {
				const answer = await signIn(email, password);
				expect(answer.status).toBe(400);
				expect(cookiesOf(answer)).toBe('');
				const html = await answer.text();
				expect(html).not.toContain(password);
				bodies.push(html.replaceAll(email, '').replace(/nonce="[^"]*"/g, ''));
			}
			expect(bodies[0]).toBe(bodies[1]);
		});

		it('mails a link built from our own address, whatever the headers claim', async () => {
			const forgeries: Record<string, string>[] = [
				{ 'x-forwarded-host': 'evil.example', 'x-forwarded-proto': 'https' },
				{ forwarded: 'host=evil.example' },
				{ 'x-original-host': 'evil.example', referer: 'https://evil.example/' }
			];
			for (const headers of forgeries) {
				await post('/sign-in/link', { email: owner.email }, headers);
				await post('/forgotten', { email: owner.email }, headers);
			}
			const mails = await app.db('mail_outbox').select('text', 'html');
			expect(mails.length).toBeGreaterThan(1);
			for (const mail of mails) {
				expect(mail.text + mail.html).not.toContain('evil');
				const links = mail.text.match(/https?:\/\/\S+/g);
				expect(links?.every((link) => link.startsWith(`${app.origin}/`))).toBe(true);
			}
		});

		it('answers alike whether a link was sent or not', async () => {
			const bodies = [];
			for (const email of [engineer.email, 'somebody.else@example.com']) {
				const answer = await post('/sign-in/link', { email });
				expect(answer.status).toBe(200);
				bodies.push((await answer.text()).replaceAll(email, '').replace(/nonce="[^"]*"/g, ''));
			}
			expect(bodies[0]).toBe(bodies[1]);
		});

		it('lets a link be opened by anybody as often as they like, and used once by pressing the button', async () => {
			await app.db('mail_outbox').delete();
			await post('/sign-in/link?next=%2Fprofile', { email: engineer.email });
			const mail = await lastMail();
			const link = new URL(mail.text.match(/https?:\/\/\S+/)?.[0] ?? '');
			const path = link.pathname + link.search;
			for (let i = 0; i < 3; i++) {
				const looked = await app.request(path);
				expect(looked.status).toBe(200);
				expect(cookiesOf(looked)).toBe('');
				await app.request(path, { method: 'HEAD' });
			}
			const token = link.searchParams.get('token') ?? '';
			const used = await post(path, { token });
			expect([used.status, used.headers.get('location')]).toEqual([303, '/profile']);
			const page = await app.request('/profile', { as: cookiesOf(used) });
			expect(await page.text()).toContain(engineer.email);
			const again = await post(path, { token });
			expect([again.status, cookiesOf(again)]).toEqual([400, '']);
		});

		it('ends with signing out: the cookie is of no more use', async () => {
			const as = cookiesOf(await signIn(owner.email));
			expect((await app.request('/profile', { as })).status).toBe(200);
			const out = await app.request('/sign-out', { method: 'POST', as, body: new URLSearchParams() });
			expect(out.headers.get('location')).toBe('/sign-in?done=signed-out');
			const after = await app.request('/profile', { as });
			expect([after.status, after.headers.get('location')]).toEqual([303, '/sign-in?next=%2Fprofile']);
			expect(after.headers.getSetCookie().join()).toMatch(/sinewright\.session=;.*(Max-Age=0|1970)/i);
		});

		it('ends everywhere at once', async () => {
			const devices = [cookiesOf(await signIn(owner.email)), cookiesOf(await signIn(owner.email))];
			await app.request('/profile?/signOutEverywhere', {
				method: 'POST',
				as: devices[0] ?? '',
				body: new URLSearchParams()
			});
			for (const as of devices) expect((await app.request('/profile', { as })).status).toBe(303);
		});

		it('takes effect on the next request when the owner changes or ends a role', async () => {
			const as = await app.signInAs(engineer);
			expect((await app.request('/practice/people', { as })).status).toBe(403);
			await app.db('memberships').where({ id: engineer.membershipId }).update({ role: 'owner' });
			expect((await app.request('/practice/people', { as })).status).toBe(200);
			await app.db('memberships').where({ id: engineer.membershipId }).update({ role: 'engineer' });
			expect((await app.request('/practice/people', { as })).status).toBe(403);
			await app.db('memberships').where({ id: engineer.membershipId }).update({ revoked_at: '2026-01-01' });
			expect((await app.request('/practice/people', { as })).status).toBe(303);
			await app.db('memberships').where({ id: engineer.membershipId }).update({ revoked_at: null });
		});

		it("keeps Auth.js' own pages and endpoints closed", async () => {
			const as = await app.signInAs(owner);
			for (const path of [
				'/auth/session',
				'/auth/signin',
				'/auth/providers',
				'/auth/csrf',
				'/auth/callback/link'
			])
				expect((await app.request(path, { as })).status).toBe(404);
			const direct = await post('/auth/callback/password', { email: owner.email, password: PASSWORD });
			expect([direct.status, cookiesOf(direct)]).toEqual([404, '']);
		});

		it('carries security headers and a request id on every answer', async () => {
			for (const path of ['/sign-in', '/nowhere', '/healthz', '/profile', '/auth/session']) {
				const { headers } = await app.request(path);
				expect(headers.get('x-content-type-options')).toBe('nosniff');
				expect(headers.get('referrer-policy')).toBe('same-origin');
				expect(headers.get('permissions-policy')).toContain('camera=()');
				expect(headers.get('x-request-id')).toMatch(/^[0-9a-f-]{36}$/);
			}
			const page = await app.request('/sign-in');
			expect(page.headers.get('content-security-policy')).toMatch(/frame-ancestors 'none'/);
		});

		it('shows the reference of an error that the header also carries', async () => {
			const answer = await app.request('/nowhere');
			expect(await answer.text()).toContain(answer.headers.get('x-request-id'));
		});

		it('refuses writes from another site, forms and others alike', async () => {
			const as = await app.signInAs(owner);
			const evil = { origin: 'https://evil.example' };
			const writes = [
				{ method: 'POST', body: new URLSearchParams(), headers: evil },
				{ method: 'POST', body: '{}', headers: { ...evil, 'content-type': 'application/json' } },
				{ method: 'PUT', body: 'x', headers: { ...evil, 'content-type': 'application/octet-stream' } },
				{ method: 'DELETE', headers: evil },
				{ method: 'POST', body: '{}', withoutOrigin: true, headers: { 'content-type': 'application/json' } }
			];
			for (const write of writes) expect((await app.request('/profile', { as, ...write })).status).toBe(403);
		});

		it('keeps the theme that was chosen, in the page itself', async () => {
			const chosen = await post('/theme', { theme: 'dark', next: '/sign-in' });
			expect(chosen.headers.get('location')).toBe('/sign-in');
			const page = await app.request('/sign-in', { as: cookiesOf(chosen) });
			expect(await page.text()).toContain('data-theme="dark"');
		});

		// Last: it uses the limits up.
		it('makes whoever guesses wait, and says how long', async () => {
			const answers = [];
			for (let i = 0; i < 12; i++) answers.push(await signIn('guessed@example.com', `guess ${i}`));
			const last = answers.at(-1);
			expect(answers[0]?.status).toBe(400);
			expect(last?.status).toBe(429);
			expect(Number(last?.headers.get('retry-after'))).toBeGreaterThan(60);
			expect(await last?.text()).toMatch(/Too many attempts\. Wait \d+ minutes/);
			expect((await signIn(owner.email)).status).toBe(303);

			const mails = [];
			for (let i = 0; i < 7; i++) mails.push((await post('/forgotten', { email: 'x@example.com' })).status);
			expect(mails.at(-1)).toBe(429);
		});

		it('stops guessing at many addresses from one place too', async () => {
			let status = 0;
			for (let i = 0; i < 70 && status !== 429; i++)
				status = (await signIn(`guess${i}@example.com`, 'x')).status;
			expect(status).toBe(429);
		});
	}
);
