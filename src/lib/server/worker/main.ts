/** The worker process: takes long work from the queue and sends mail from the outbox, until told to stop. */
import { setTimeout as sleep } from 'node:timers/promises';
import { randomUUID } from 'node:crypto';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { createWindowPool } from '../analysis/pool/window-pool';
import { buildContainer } from '../container';
import { parseConfig } from '../config';
import { runJob } from '../jobs/run-job';

// The thread's file lies beside this one, as a source or compiled, whichever this is.
const own = fileURLToPath(import.meta.url);
const threadFile = own.endsWith('.ts')
	? join(dirname(own), '../analysis/pool/window-thread.ts')
	: join(dirname(own), 'window-thread.js');
const windowPool = createWindowPool(threadFile);
const container = buildContainer(parseConfig(process.env), 'worker', { windowPool });
const { config, jobs, mail, log } = container;
const workerId = randomUUID();

let stopping = false;
const wake = new AbortController();
for (const signal of ['SIGTERM', 'SIGINT'] as const)
	process.once(signal, () => {
		stopping = true;
		wake.abort();
	});
// The supervisor's death must not leave a worker behind.
process.once('disconnect', () => {
	stopping = true;
	wake.abort();
});

const released = await jobs.releaseAllRunning();
log.info({ released }, 'worker started');

while (!stopping) {
	const job = await jobs.claim(workerId);
	if (job) await runJob(container, job, () => stopping);
	const sent = await mail.deliverDue();
	if (!job && sent === 0)
		await sleep(config.workerPoll_ms, undefined, { signal: wake.signal }).catch(() => undefined);
}

await windowPool.close();
await container.db.destroy();
log.info('worker stopped');
process.exit(0);
