import { describe, expect, it } from 'vitest';
import { parseConfig } from '$lib/server/config';

const SECRET = 'x'.repeat(32);

describe('settings', () => {
	it('have safe defaults outside production', () => {
		expect(parseConfig({ SINEWRIGHT_MODE: 'development', PORT: '5173' })).toMatchObject({
			host: '127.0.0.1',
			port: 5173,
			origin: 'http://localhost:5173',
			dataDir: 'data',
			session_days: 14,
			mailboxVisible: true
		});
	});

	it('production does not start without its address and its secret, and says which', () => {
		expect(() => parseConfig({})).toThrow(/ORIGIN must be set[\s\S]*AUTH_SECRET must be set/);
		expect(() => parseConfig({ ORIGIN: 'https://pq.example', AUTH_SECRET: 'short' })).toThrow(
			/32 characters/
		);
		expect(parseConfig({ ORIGIN: 'https://pq.example/', AUTH_SECRET: SECRET }).origin).toBe(
			'https://pq.example'
		);
	});

	it('show the local mailbox in demo and development only, and never beside a mail server', () => {
		expect(parseConfig({ ORIGIN: 'https://pq.example', AUTH_SECRET: SECRET }).mailboxVisible).toBe(false);
		expect(parseConfig({ SINEWRIGHT_MODE: 'demo', SMTP_URL: 'smtp://mail.example' }).mailboxVisible).toBe(
			false
		);
		expect(parseConfig({ SINEWRIGHT_MODE: 'demo' }).mailboxVisible).toBe(true);
	});

	it.each([
		['PORT', '70000'],
		['SMTP_URL', 'http://mail.example'],
		['SESSION_DAYS', '400'],
		['LOG_LEVEL', 'loud'],
		['SINEWRIGHT_MODE', 'staging'],
		['UPLOAD_LIMIT_MB', '-1']
	])('refuse %s=%s by name', (name, value) => {
		expect(() => parseConfig({ SINEWRIGHT_MODE: 'test', [name]: value })).toThrow(new RegExp(name));
	});

	it('treat an empty variable as not given', () => {
		expect(parseConfig({ SINEWRIGHT_MODE: 'test', SMTP_URL: '' }).smtpUrl).toBeNull();
	});
});
