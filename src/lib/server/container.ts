import { join } from 'node:path';
import type { Config } from './config';
import { databaseFile } from './db/database-file';
import { openDatabase, type Db } from './db/database';
import { createJobQueue } from './jobs/job-queue';
import { createLog, type Log } from './log';
import { createOutbox, type MailTransport } from './mail/outbox';
import { createMailTransport } from './mail/transport';
import type { ServiceDeps } from './service-deps';
import type { BlobStore } from './storage/blob-store';
import { createDiskBlobStore } from './storage/disk-blob-store';

export interface Overrides {
	db?: Db;
	blobs?: BlobStore;
	mailTransport?: MailTransport;
	clock?: () => Date;
	log?: Log;
}

// One line per service, e.g. `captures: createCapturesService(deps)`.
// eslint-disable-next-line @typescript-eslint/no-unused-vars -- the first service will take it
function buildServices(deps: ServiceDeps) {
	return {};
}

export type Services = ReturnType<typeof buildServices>;
export interface Container extends ServiceDeps {
	services: Services;
}

/** Composition root: the one place where parts are wired. Tests build their own with overrides. */
export function buildContainer(
	config: Config,
	process: 'web' | 'worker' | 'script',
	overrides: Overrides = {}
): Container {
	const log = overrides.log ?? createLog(config.logLevel, process);
	const clock = overrides.clock ?? (() => new Date());
	const db = overrides.db ?? openDatabase(databaseFile({ DATA_DIR: config.dataDir }));
	const deps: ServiceDeps = {
		config,
		db,
		blobs: overrides.blobs ?? createDiskBlobStore(join(config.dataDir, 'blobs')),
		jobs: createJobQueue(db, clock),
		mail: createOutbox(db, overrides.mailTransport ?? createMailTransport(config), clock, log),
		clock,
		log
	};
	return { ...deps, services: buildServices(deps) };
}

const KEY = Symbol.for('sinewright.container');
type Holder = { [KEY]?: Container };

/** The web process's container, made at first use; kept on globalThis so that hot reload does not open a second pool. */
export function container(): Container {
	const holder = globalThis as Holder;
	if (!holder[KEY]) throw new Error('the container is built in hooks.server.ts before any request');
	return holder[KEY];
}

export function installContainer(built: Container): void {
	(globalThis as Holder)[KEY] = built;
}

export function installedContainer(): Container | null {
	return (globalThis as Holder)[KEY] ?? null;
}
