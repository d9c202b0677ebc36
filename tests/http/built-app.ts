import { spawn, type ChildProcess } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import { existsSync, mkdtempSync, rmSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { Actor } from '$lib/access/access';
import { parseConfig, type Config } from '$lib/server/config';
import { databaseFile } from '$lib/server/db/database-file';
import type { Db } from '$lib/server/db/database';
import { hashToken } from '$lib/server/auth/tokens';
import { openTestDatabase } from '../support/test-database';

const ENTRY = resolve('build/index.js');

/** These tests need the built app: `npm test` builds first, `npm run build` does it by hand. */
export const buildMissing = !existsSync(ENTRY);

export interface BuiltApp {
	origin: string;
	config: Config;
	db: Db;
	/** One request that follows no redirect; `as` is a session cookie from signInAs. */
	request(path: string, options?: AppRequest): Promise<Response>;
	/** Opens a session straight in the database and gives its cookie. */
	signInAs(actor: Actor): Promise<string>;
	stop(): Promise<void>;
}

export interface AppRequest {
	method?: string;
	as?: string;
	body?: BodyInit;
	headers?: Record<string, string>;
	/** Leave out the Origin header that a browser would send with a write. */
	withoutOrigin?: boolean;
}

async function freePort(): Promise<number> {
	const server = createServer();
	await new Promise<void>((done) => server.listen(0, '127.0.0.1', done));
	const { port } = server.address() as AddressInfo;
	await new Promise((done) => server.close(done));
	return port;
}

function whenListening(process: ChildProcess): Promise<void> {
	return new Promise((ready, fail) => {
		let output = '';
		const read = (chunk: Buffer) => {
			output += chunk.toString();
			if (output.includes('Listening on')) ready();
		};
		process.stdout?.on('data', read);
		process.stderr?.on('data', read);
		process.once('exit', (code) => fail(new Error(`the app ended with ${code}:\n${output}`)));
	});
}

/** The built app on a fresh database. `prepare` fills it before the app starts. */
export async function startBuiltApp(prepare: (db: Db, config: Config) => Promise<void>): Promise<BuiltApp> {
	const port = await freePort();
	const origin = `http://localhost:${port}`;
	const dataDir = mkdtempSync(join(tmpdir(), 'sinewright-http-'));
	const settings = {
		SINEWRIGHT_MODE: 'test',
		DATA_DIR: dataDir,
		HOST: '127.0.0.1',
		PORT: String(port),
		ORIGIN: origin,
		LOG_LEVEL: 'error',
		AUTH_SECRET: randomBytes(32).toString('hex')
	};
	const config = parseConfig(settings);
	const db = await openTestDatabase(databaseFile({ DATA_DIR: dataDir }));
	await prepare(db, config);
	const server = spawn(process.execPath, [ENTRY], {
		env: { PATH: process.env['PATH'], NODE_ENV: 'production', ...settings },
		stdio: ['ignore', 'pipe', 'pipe']
	});
	await whenListening(server);

	return {
		origin,
		config,
		db,
		request(path, { method = 'GET', as, body, headers = {}, withoutOrigin = false } = {}) {
			return fetch(origin + path, {
				method,
				redirect: 'manual',
				headers: {
					accept: 'text/html',
					...(as === undefined ? {} : { cookie: as }),
					...(method === 'GET' || withoutOrigin ? {} : { origin }),
					...headers
				},
				...(body === undefined ? {} : { body })
			});
		},
		async signInAs(actor) {
			const token = randomBytes(16).toString('hex');
			const now = new Date();
			await db('sessions').insert({
				token_hash: hashToken(token),
				user_id: actor.userId,
				membership_id: actor.membershipId,
				created_at: now.toISOString(),
				last_seen_at: now.toISOString(),
				expires_at: new Date(now.getTime() + 3_600_000).toISOString()
			});
			return `sinewright.session=${token}`;
		},
		async stop() {
			const ended = new Promise((done) => server.once('exit', done));
			server.kill('SIGTERM');
			await ended;
			await db.destroy();
			rmSync(dataDir, { recursive: true, force: true });
		}
	};
}

/** Cookies that an answer sets, ready to be sent back. */
export function cookiesOf(response: Response): string {
	return response.headers
		.getSetCookie()
		.map((cookie) => cookie.slice(0, cookie.indexOf(';')))
		.filter((cookie) => !cookie.endsWith('='))
		.join('; ');
}
