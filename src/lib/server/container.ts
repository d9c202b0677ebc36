import type { WindowPool } from './analysis/pool/window-pool';
import type { Config } from './config';
import { databaseFile } from './db/database-file';
import { openDatabase, type Db } from './db/database';
import { createJobQueue } from './jobs/job-queue';
import { createLog, type Log } from './log';
import { createOutbox, type MailTransport } from './mail/outbox';
import { createMailTransport } from './mail/transport';
import { createAccountService } from './services/account.service';
import { createInvitationsService } from './services/invitations.service';
import { createLimitLibraryService } from './services/limit-library.service';
import { createMailboxService } from './services/mailbox.service';
import { createPeopleService } from './services/people.service';
import { createPracticeService } from './services/practice.service';
import { createDeskService } from './services/desk.service';
import { createCaptureInstrumentService } from './services/capture-instrument.service';
import { createCalibrationsService } from './services/calibrations.service';
import { createInstrumentsService } from './services/instruments.service';
import { createSensorsService } from './services/sensors.service';
import { createPortalService } from './services/portal.service';
import { createQueriesService } from './services/queries.service';
import { createRegisterService } from './services/register.service';
import { createSignInService } from './services/sign-in.service';
import { createSurveysService } from './services/surveys.service';
import type { ServiceDeps } from './service-deps';
import type { BlobStore } from './storage/blob-store';
import { createActionsService } from './services/actions.service';
import { createAssessmentsService } from './services/assessments.service';
import { createReportsService } from './services/reports.service';
import { createCapturesService } from './services/captures.service';
import { createChecksService } from './services/checks.service';
import { createReadingsService } from './services/readings.service';
import { createTablesService } from './services/tables.service';
import { createReceivingService } from './services/receiving.service';
import { createViewerService } from './services/viewer.service';
import { createUploadsService } from './services/uploads.service';
import { openBlobStore } from './storage/open-blob-store';

export interface Overrides {
	db?: Db;
	blobs?: BlobStore;
	mailTransport?: MailTransport;
	clock?: () => Date;
	log?: Log;
	windowPool?: WindowPool;
}

// One line per service, e.g. `captures: createCapturesService(deps)`.
function buildServices(deps: ServiceDeps) {
	return {
		signIn: createSignInService(deps),
		register: createRegisterService(deps),
		surveys: createSurveysService(deps),
		instruments: createInstrumentsService(deps),
		sensors: createSensorsService(deps),
		calibrations: createCalibrationsService(deps),
		captureInstrument: createCaptureInstrumentService(deps),
		limitLibrary: createLimitLibraryService(deps),
		account: createAccountService(deps),
		invitations: createInvitationsService(deps),
		people: createPeopleService(deps),
		practice: createPracticeService(deps),
		mailbox: createMailboxService(deps),
		portal: createPortalService(deps),
		queries: createQueriesService(deps),
		desk: createDeskService(deps),
		viewer: createViewerService(deps),
		uploads: createUploadsService(deps),
		receiving: createReceivingService(deps),
		captures: createCapturesService(deps),
		tables: createTablesService(deps),
		checks: createChecksService(deps),
		readings: createReadingsService(deps),
		assessments: createAssessmentsService(deps),
		actions: createActionsService(deps),
		reports: createReportsService(deps)
	};
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
		blobs: overrides.blobs ?? openBlobStore(config),
		jobs: createJobQueue(db, clock),
		mail: createOutbox(db, overrides.mailTransport ?? createMailTransport(config), clock, log),
		clock,
		log,
		windowPool: overrides.windowPool ?? null
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
