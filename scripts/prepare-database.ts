import knex from 'knex';
import config from '../knexfile';
import { databaseFile } from '../src/lib/server/db/database-file';
import { knexConfig } from '../src/lib/server/db/knex-config';

/** Runs outstanding migrations and the seeds that every installation needs (the limit library). Safe to repeat. */
export async function prepareDatabase(dataDir: string): Promise<void> {
	const db = knex({ ...config, ...knexConfig(databaseFile({ DATA_DIR: dataDir })) });
	try {
		await db.migrate.latest();
		await db.seed.run();
	} finally {
		await db.destroy();
	}
}
