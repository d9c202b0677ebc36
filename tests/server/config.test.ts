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
		['UPLOAD_LIMIT_MB', '-1'],
		['STORAGE', 'attic'],
		['BUCKET_ENDPOINT', 'objects.example.com'],
		['BUCKET_PREFIX', 'no-slash'],
		['BUCKET_ACCESS_KEY', 'without-its-secret']
	])('refuse %s=%s by name', (name, value) => {
		expect(() => parseConfig({ SINEWRIGHT_MODE: 'test', [name]: value })).toThrow(new RegExp(name));
	});

	it('choose a folder, or a bucket with its name and where it is', () => {
		const base = { SINEWRIGHT_MODE: 'test', STORAGE: 'bucket' };
		expect(parseConfig({ SINEWRIGHT_MODE: 'test' }).bucket).toBeNull();
		expect(() => parseConfig(base)).toThrow(/BUCKET_NAME must be set when STORAGE is bucket/);
		expect(
			parseConfig({
				...base,
				BUCKET_NAME: 'captures',
				BUCKET_ENDPOINT: 'https://objects.example.com',
				BUCKET_ACCESS_KEY: 'key',
				BUCKET_SECRET_KEY: 'secret',
				BUCKET_PREFIX: 'sinewright/'
			}).bucket
		).toEqual({
			name: 'captures',
			region: 'us-east-1',
			endpoint: 'https://objects.example.com',
			credentials: { accessKeyId: 'key', secretAccessKey: 'secret' },
			pathStyle: true,
			prefix: 'sinewright/'
		});
		expect(parseConfig({ ...base, BUCKET_NAME: 'captures' }).bucket?.credentials).toBeNull();
	});

	it('treat an empty variable as not given', () => {
		expect(parseConfig({ SINEWRIGHT_MODE: 'test', SMTP_URL: '' }).smtpUrl).toBeNull();
	});
});
