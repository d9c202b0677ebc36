import { mkdtempSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import knex from 'knex';
import { afterEach, describe, expect, it } from 'vitest';
import type { Db } from '$lib/server/db/database';
import { knexConfig } from '$lib/server/db/knex-config';
import { seed } from '../../seeds/01-limits';
import { issuedReport, practiceWithOwner } from '../support/practice-world';
import { migrationSource, openTestDatabase } from '../support/test-database';

let db: Db;
afterEach(() => db.destroy());

const tableNames = async (handle: Db): Promise<string[]> => {
	const rows: { name: string }[] = await handle('sqlite_master' as never)
		.where({ type: 'table' } as never)
		.whereNot('name' as never, 'like', 'sqlite_%')
		.select('name' as never);
	return rows
		.map((row) => row.name)
		.filter((name) => !name.startsWith('knex_'))
		.sort();
};

describe('the schema', () => {
	it('goes up, down and up again, empty and with the limit library in it', async () => {
		db = await openTestDatabase();
		const tables = await tableNames(db);
		expect(tables.length).toBeGreaterThan(30);
		await db.migrate.rollback({ migrationSource }, true);
		expect(await tableNames(db)).toEqual([]);
		await db.migrate.latest({ migrationSource });
		await seed(db);
		await db.migrate.rollback({ migrationSource }, true);
		await db.migrate.latest({ migrationSource });
		expect(await tableNames(db)).toEqual(tables);
	});

	it('has a row type with exactly its columns for each table', async () => {
		db = await openTestDatabase();
		const source = readFileSync('src/lib/server/db/rows.ts', 'utf8');
		const typeOf = new Map(
			[...source.matchAll(/^\t\t(\w+): (\w+Row);$/gm)].map((found) => [found[1]!, found[2]!])
		);
		expect([...typeOf.keys()].sort()).toEqual(await tableNames(db));
		for (const [table, type] of typeOf) {
			const body = new RegExp(`export interface ${type} \\{([^}]*)\\}`).exec(source)?.[1] ?? '';
			const stated = [...body.matchAll(/^\t(\w+):/gm)].map((found) => found[1]!);
			const columns: { name: string }[] = await db.raw(`pragma table_info(${table})`);
			expect(stated.sort(), table).toEqual(columns.map((column) => column.name).sort());
		}
	});

	it('keeps a file in WAL mode with foreign keys on', async () => {
		db = knex(knexConfig(join(mkdtempSync(join(tmpdir(), 'sinewright-db-')), 'test.sqlite')));
		expect(await db.raw('pragma journal_mode')).toEqual([{ journal_mode: 'wal' }]);
		expect(await db.raw('pragma foreign_keys')).toEqual([{ foreign_keys: 1 }]);
	});

	it('takes the limit library twice without changing a row', async () => {
		db = await openTestDatabase();
		await seed(db);
		const ids = await db('limit_rows').orderBy('id').pluck('id');
		await seed(db);
		expect(await db('limit_rows').orderBy('id').pluck('id')).toEqual(ids);
		expect(ids.length).toBeGreaterThan(500);
	});
});

describe('what the database itself refuses', () => {
	it('altering or deleting history', async () => {
		db = await openTestDatabase();
		await db('audit_events').insert({
			actor_name: 'x',
			action: 'a',
			subject_kind: 's',
			subject_id: '1',
			detail_json: '{}',
			at: '2026-03-01T00:00:00.000Z'
		});
		await expect(db('audit_events').update({ action: 'b' })).rejects.toThrow(/append-only/);
		await expect(db('audit_events').delete()).rejects.toThrow(/append-only/);
	});

	it('changing what was issued; its standing may change', async () => {
		db = await openTestDatabase();
		const owner = await practiceWithOwner(db, 'Alder');
		const { revisionId } = await issuedReport(db, owner, 'Millbrook');
		const revision = () => db('report_revisions').where({ id: revisionId });
		await expect(revision().update({ summary: 'other words' })).rejects.toThrow(/immutable/);
		await expect(revision().update({ pdf_sha256: null })).rejects.toThrow(/immutable/);
		await expect(revision().update({ status: 'draft' })).rejects.toThrow(/immutable/);
		await expect(revision().delete()).rejects.toThrow(/kept/);
		expect(await revision().update({ status: 'superseded' })).toBe(1);
	});

	it('a client without an organisation, and a consultant with one', async () => {
		db = await openTestDatabase();
		const owner = await practiceWithOwner(db, 'Alder');
		const membership = { practice_id: owner.practiceId, created_at: '2026-03-01T00:00:00.000Z' };
		await db('users').insert({
			id: 'u',
			email: 'u@example.com',
			name: 'U',
			created_at: membership.created_at
		});
		await expect(
			db('memberships').insert({ ...membership, id: 'm', user_id: 'u', role: 'client', client_id: null })
		).rejects.toThrow(/CHECK/);
	});
});
