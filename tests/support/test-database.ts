import knex, { type Knex } from 'knex';
import { knexConfig } from '$lib/server/db/knex-config';
import type { Db } from '$lib/server/db/database';

interface MigrationModule {
	up(knex: Knex): Promise<void>;
	down(knex: Knex): Promise<void>;
}

const modules = import.meta.glob<MigrationModule>('/migrations/*.ts', { eager: true });

/** The project's migrations for knex, under the names that the command line uses too. */
export const migrationSource: Knex.MigrationSource<string> = {
	getMigrations: async () => Object.keys(modules).sort(),
	getMigrationName: (path) => path.slice(path.lastIndexOf('/') + 1),
	getMigration: async (path) => modules[path]!
};

/** A fresh, fully migrated database: a file when a path is given, else in memory. Destroy it after use. */
export async function openTestDatabase(filename = ':memory:'): Promise<Db> {
	const db = knex(knexConfig(filename));
	await db.migrate.latest({ migrationSource });
	return db;
}
