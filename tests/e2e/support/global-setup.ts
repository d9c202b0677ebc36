import { spawn, type ChildProcess } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import type { TestProject } from 'vitest/node';

declare module 'vitest' {
	interface ProvidedContext {
		origin: string;
		dataDir: string;
	}
}

async function freePort(): Promise<number> {
	return new Promise((resolve) => {
		const probe = createServer().listen(0, '127.0.0.1', () => {
			const address = probe.address();
			probe.close(() => resolve(typeof address === 'object' && address ? address.port : 0));
		});
	});
}

async function run(script: string, env: NodeJS.ProcessEnv): Promise<void> {
	const child = spawn(process.execPath, ['--import', 'tsx', script], { env, stdio: 'inherit' });
	const code = await new Promise((resolve) => child.once('exit', resolve));
	if (code !== 0) throw new Error(`${script} ended with ${String(code)}`);
}

async function waitUntilUp(origin: string, child: ChildProcess): Promise<void> {
	for (let tries = 0; tries < 400; tries++) {
		if (child.exitCode !== null) throw new Error(`the product ended with ${child.exitCode} before it was up`);
		const up = await fetch(`${origin}/healthz`).then(
			(response) => response.ok,
			() => false
		);
		if (up) return;
		await sleep(150);
	}
	throw new Error('the product did not come up within a minute');
}

/** Starts the built product on a folder of its own and stops it as a service manager would. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
	if (!existsSync('build/index.js'))
		throw new Error('The browser tests need a build: run "npm test", or "npm run build" first.');
	const dataDir = mkdtempSync(join(tmpdir(), 'sinewright-e2e-'));
	const port = await freePort();
	const origin = `http://localhost:${port}`;
	const env = {
		...process.env,
		SINEWRIGHT_MODE: 'demo',
		DATA_DIR: dataDir,
		PORT: String(port),
		HOST: 'localhost',
		ORIGIN: origin,
		LOG_LEVEL: process.env['E2E_LOG_LEVEL'] ?? 'error',
		NODE_ENV: 'production'
	};
	await run('tests/e2e/support/seed-people.ts', env);
	const child = spawn(process.execPath, ['--import', 'tsx', 'scripts/serve.ts'], { env, stdio: 'inherit' });
	await waitUntilUp(origin, child);
	project.provide('origin', origin);
	project.provide('dataDir', dataDir);

	return async () => {
		const asked_ms = Date.now();
		child.kill('SIGTERM');
		const code = await new Promise<number | null>((resolve) => {
			if (child.exitCode !== null) resolve(child.exitCode);
			else child.once('exit', resolve);
		});
		rmSync(dataDir, { recursive: true, force: true });
		// A stop that hangs or fails is a defect of the product, not of the tests.
		if (code !== 0) throw new Error(`the product ended with ${String(code)} on SIGTERM`);
		console.log(`web and worker stopped together ${Date.now() - asked_ms} ms after SIGTERM`);
	};
}
