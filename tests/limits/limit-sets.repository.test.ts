import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Db } from '$lib/server/db/database';
import { limitSetsRepository } from '$lib/server/repositories/limit-sets.repository';
import { limitSetSha256, storePublishedLimitSet } from '$lib/server/repositories/published-limit-sets';
import type { LimitSet } from '$lib/limits/limit-set';
import { openTestDatabase } from '../support/test-database';
import { seed } from '../../seeds/01-limits';
import { LIMIT_FILE_KEYS, limitSet } from './load-limit-files';

let db: Db;
const NOW = new Date('2026-03-01T08:00:00Z');

async function insertPractice(id: string): Promise<void> {
	const columns = await db('practices').columnInfo();
	const filled: Record<string, string> = { id, name: id };
	for (const [name, info] of Object.entries(columns)) {
		if (name in filled || info.nullable || info.defaultValue !== null) continue;
		filled[name] = name === 'paper' ? 'A4' : `${id} ${name}`;
	}
	await db('practices').insert(filled);
}

/** An assessment that rests on the set, without the chain of surveys above it. */
async function insertAssessment(id: string, limitSetId: number): Promise<void> {
	await db.raw('pragma foreign_keys = off');
	await db('assessments').insert({
		...{ id, practice_id: 'p1', client_id: 'c1', survey_id: 's1', limit_set_id: limitSetId },
		...{ verdict: 'compliant', evidence: 'weekly', advisory: 0, engine_version: '1', is_current: 1 },
		...{ input_json: '{}', result_json: '{}', created_at: NOW.toISOString() }
	});
	await db.raw('pragma foreign_keys = on');
}

const withoutIds = (set: LimitSet): unknown =>
	JSON.parse(JSON.stringify(set, (name: string, value: unknown) => (name === 'id' ? undefined : value)));

beforeAll(async () => {
	db = await openTestDatabase();
	await seed(db);
	await insertPractice('p1');
	await insertPractice('p2');
});
afterAll(() => db.destroy());

describe('published sets in SQLite', () => {
	it.each(LIMIT_FILE_KEYS)('%s comes back exactly as it was read', async (key) => {
		const stored = await limitSetsRepository(db, 'p1').byKey(key);
		expect(stored && withoutIds(stored)).toEqual(withoutIds(limitSet(key)));
	});

	it('are listed once, also when the seed runs again', async () => {
		const before = await limitSetsRepository(db, 'p1').list();
		await seed(db);
		const after = await limitSetsRepository(db, 'p1').list();
		expect(after).toEqual(before);
		expect(after.map((set) => set.key).sort()).toEqual([...LIMIT_FILE_KEYS].sort());
		expect(after.filter((set) => set.standard === 'IEEE Std 519').map((set) => set.edition)).toEqual([
			'2022',
			'2014',
			'1992'
		]);
	});

	it('are found by id, and nothing is found by a strange one', async () => {
		const repository = limitSetsRepository(db, 'p1');
		const stored = await repository.byKey('en-50160-2022');
		expect(await repository.byId(stored?.id ?? -1)).toEqual(stored);
		expect(await repository.byId(999_999)).toBeNull();
		expect(await repository.byKey('no-such-set')).toBeNull();
	});
});

describe('a changed data file', () => {
	const changed = (key: string): LimitSet => ({ ...limitSet(key), title: 'Changed title' });

	it('replaces a set that nothing rests on, under the same id', async () => {
		const repository = limitSetsRepository(db, 'p1');
		const before = await repository.byKey('iacs-ur-e24-2018');
		expect(await storePublishedLimitSet(db, changed('iacs-ur-e24-2018'), NOW)).toBe('replaced');
		const after = await repository.byKey('iacs-ur-e24-2018');
		expect(after?.id).toBe(before?.id);
		expect(after?.title).toBe('Changed title');
		expect(after?.tables.length).toBe(before?.tables.length);
	});

	it('leaves a set alone that an assessment rests on', async () => {
		const repository = limitSetsRepository(db, 'p1');
		const before = await repository.byKey('en-50160-2010');
		await insertAssessment('a1', before?.id ?? -1);
		expect(await storePublishedLimitSet(db, changed('en-50160-2010'), NOW)).toBe('kept-in-use');
		expect(await repository.byKey('en-50160-2010')).toEqual(before);
	});

	it('is recognised by its content and not by its ids', () => {
		const set = limitSet('en-50160-2022');
		expect(limitSetSha256({ ...set, id: 77 })).toBe(limitSetSha256(set));
		expect(limitSetSha256(changed('en-50160-2022'))).not.toBe(limitSetSha256(set));
	});
});

describe('one practice never sees another’s set', () => {
	it('by list, id or key', async () => {
		const published = limitSet('ieee-519-2022');
		const [own] = await db('limit_sets')
			.insert({
				...{ key: 'ieee-519-2022', practice_id: 'p2', standard: 'Utility contract', edition: '7' },
				...{ title: 't', publisher: 'p', jurisdiction: 'j', status: 's', notes_json: '[]' },
				...{ source_sha256: 'x', created_at: NOW.toISOString() }
			})
			.returning('id');
		const id = (own as { id: number }).id;
		const first = limitSetsRepository(db, 'p1');
		const second = limitSetsRepository(db, 'p2');
		expect(await first.byId(id)).toBeNull();
		expect((await first.byKey('ieee-519-2022'))?.title).toBe(published.title);
		expect((await first.list()).some((set) => set.id === id)).toBe(false);
		expect((await second.byId(id))?.practiceId).toBe('p2');
		expect((await second.byKey('ieee-519-2022'))?.id).toBe(id);
	});
});
