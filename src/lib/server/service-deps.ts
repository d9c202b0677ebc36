import type { WindowPool } from './analysis/pool/window-pool';
import type { Config } from './config';
import type { Db } from './db/database';
import type { JobQueue } from './jobs/job-queue';
import type { Log } from './log';
import type { Outbox } from './mail/outbox';
import type { BlobStore } from './storage/blob-store';

/** What every use case may lean on. */
export interface ServiceDeps {
	config: Config;
	db: Db;
	blobs: BlobStore;
	jobs: JobQueue;
	mail: Outbox;
	clock: () => Date;
	/** Threads for long arithmetic; only the worker process has them. */
	windowPool: WindowPool | null;
	log: Log;
}
