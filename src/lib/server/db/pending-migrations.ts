import type { Db } from './database';

/** Names of the given migrations that this database has not run. */
export async function pendingMigrations(db: Db, names: readonly string[]): Promise<string[]> {
	if (!(await db.schema.hasTable('knex_migrations'))) return [...names];
	const rows: { name: string }[] = await db('knex_migrations').select('name');
	const done = new Set(rows.map(({ name }) => name));
	return names.filter((name) => !done.has(name));
}

/** A database that lacks tables fails at the first request that needs them; better not to start at all. */
export async function assertMigrated(db: Db, names: readonly string[]): Promise<void> {
	const pending = await pendingMigrations(db, names);
	if (pending.length > 0)
		throw new Error(
			`The database lacks ${pending.length} of ${names.length} migrations (first: ${pending[0]}). Run "npm run migrate", then start again.`
		);
}
