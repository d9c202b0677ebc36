import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import type { Db } from '$lib/server/db/database';
import type { LimitSetSort } from '$lib/server/read-models/limit-library';
import type { ListQuery } from '$lib/server/read-models/list-query';
import { createLimitLibraryService } from '$lib/server/services/limit-library.service';
import { openTestDatabase } from '../support/test-database';
import { seed } from '../../seeds/01-limits';
import { LIMIT_FILE_KEYS } from './load-limit-files';

let db: Db;
const actor: Actor = {
	...{ userId: 'u1', name: 'Ada Quill', email: 'ada@example.com', practiceId: 'p1', practiceName: 'P' },
	...{ membershipId: 'm1', role: 'engineer', clientId: null }
};
const ASK: ListQuery<LimitSetSort> = { q: '', sort: 'standard', descending: false, page: 1, pageSize: 25 };

beforeAll(async () => {
	db = await openTestDatabase();
	await seed(db);
});
afterAll(() => db.destroy());

const library = () => createLimitLibraryService({ db });

describe('the limit library', () => {
	it('lists every published edition with its tables and their provenance', async () => {
		const { rows, total } = await library().list(actor, ASK);
		expect(total).toBe(LIMIT_FILE_KEYS.length);
		const ieee = rows.find((row) => row.standard === 'IEEE Std 519' && row.edition === '2022');
		expect(ieee?.tables).toBe(4);
		expect(ieee?.provenances.sort()).toEqual(['cross-checked', 'single-source']);
		expect(ieee?.own).toBe(false);
	});

	it('searches, sorts and pages on the server', async () => {
		const found = await library().list(actor, { ...ASK, q: '519' });
		expect(found.rows.map((row) => row.edition)).toEqual(['2022', '2014', '1992']);
		const byTables = await library().list(actor, { ...ASK, sort: 'tables', descending: true });
		const counts = byTables.rows.map((row) => row.tables);
		expect(counts).toEqual([...counts].sort((a, b) => b - a));
		const second = await library().list(actor, { ...ASK, page: 2, pageSize: 10 });
		expect(second.rows).toHaveLength(LIMIT_FILE_KEYS.length - 10);
		expect((await library().list(actor, { ...ASK, q: '100%' })).total).toBe(0);
	});

	it('opens one set, and finds nothing by a strange or malformed id', async () => {
		const { rows } = await library().list(actor, ASK);
		const id = rows[0]?.id ?? -1;
		expect((await library().set(actor, id)).id).toBe(id);
		await expect(library().set(actor, 999_999)).rejects.toMatchObject({ code: 'not-found' });
		await expect(library().set(actor, NaN)).rejects.toMatchObject({ code: 'not-found' });
	});

	it('is closed to clients', async () => {
		const client: Actor = { ...actor, role: 'client', clientId: 'c1' };
		await expect(library().list(client, ASK)).rejects.toMatchObject({ code: 'forbidden' });
		await expect(library().set(client, 1)).rejects.toMatchObject({ code: 'forbidden' });
	});
});
