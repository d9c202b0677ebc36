import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { parseConfig } from '$lib/server/config';
import { buildContainer, type Container } from '$lib/server/container';
import { databaseFile } from '$lib/server/db/database-file';
import { practiceWithOwner } from '../support/practice-world';
import { openTestDatabase } from '../support/test-database';
import { comtradeCapture, confirmAsSuggested, onlyCapture, surveyAtPoint, upload } from './captures-world';

const ROOT = fileURLToPath(new URL('../../', import.meta.url));
const EXITS_WITHIN_MS = 5000;

let dataDir: string;
let container: Container;
let workers: ChildProcess[];
beforeEach(async () => {
	dataDir = mkdtempSync(join(tmpdir(), 'sinewright-worker-'));
	const db = await openTestDatabase(databaseFile({ DATA_DIR: dataDir }));
	const config = parseConfig({ SINEWRIGHT_MODE: 'test', DATA_DIR: dataDir, LOG_LEVEL: 'silent' });
	container = buildContainer(config, 'script', { db, mailTransport: async () => undefined });
	workers = [];
});
afterEach(async () => {
	for (const worker of workers) {
		if (worker.exitCode !== null || worker.signalCode !== null) continue;
		worker.kill('SIGKILL');
		await once(worker, 'exit');
	}
	await container.db.destroy();
	rmSync(dataDir, { recursive: true });
});

/** The real worker, as the supervisor starts it in development. */
function startWorker(): ChildProcess {
	const worker = spawn(process.execPath, ['--import', 'tsx', 'src/lib/server/worker/main.ts'], {
		cwd: ROOT,
		env: {
			...process.env,
			SINEWRIGHT_MODE: 'test',
			DATA_DIR: dataDir,
			LOG_LEVEL: 'silent',
			WORKER_POLL_MS: '30'
		},
		stdio: 'ignore'
	});
	workers.push(worker);
	return worker;
}

async function until<T>(read: () => Promise<T>, holds: (value: T) => boolean, within_ms: number): Promise<T> {
	const deadline_ms = Date.now() + within_ms;
	for (;;) {
		const value = await read();
		if (holds(value)) return value;
		if (Date.now() > deadline_ms) throw new Error(`still ${JSON.stringify(value)} after ${within_ms} ms`);
		await new Promise((resolve) => setTimeout(resolve, 15));
	}
}

describe('the worker process', () => {
	it.each(['SIGTERM', 'SIGKILL'] as const)(
		'stopped by %s in the middle of an analysis loses nothing and repeats nothing',
		async (signal) => {
			const owner = await practiceWithOwner(container.db, 'Tarn');
			const { surveyId } = await surveyAtPoint(container.db, owner);
			await upload(container, owner, surveyId, comtradeCapture(15));
			const first = startWorker();
			const captures = () => container.db('captures').where({ survey_id: surveyId });
			await until(captures, (rows) => rows.length === 1, 40_000);
			const captureId = await onlyCapture(container.db, surveyId);
			const jobId = await confirmAsSuggested(container, owner, surveyId, captureId);
			const job = async () => (await container.db('jobs').where({ id: jobId }).first())!;
			await until(job, (row) => row.progress_text.includes('windows'), 40_000);

			const told_ms = Date.now();
			first.kill(signal);
			const [code] = await once(first, 'exit');
			expect(Date.now() - told_ms).toBeLessThan(EXITS_WITHIN_MS);
			if (signal === 'SIGTERM') {
				expect(code).toBe(0);
				expect(await job()).toMatchObject({ status: 'queued', attempts: 0, worker_id: null });
			} else expect(await job()).toMatchObject({ status: 'running', attempts: 1 });
			expect(await container.db('analyses').where({ capture_id: captureId, is_finished: 1 })).toHaveLength(0);

			startWorker();
			await until(job, (row) => row.status === 'done', 60_000);
			expect(await container.db('analyses').where({ capture_id: captureId, is_finished: 1 })).toHaveLength(1);
			expect(await captures()).toMatchObject([{ status: 'analysed' }]);
		},
		180_000
	);
});
