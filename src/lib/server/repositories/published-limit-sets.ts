import { createHash } from 'node:crypto';
import type { LimitSet } from '../../limits/limit-set';
import type { Db } from '../db/database';
import {
	limitRowColumns,
	limitSetColumns,
	limitTableColumns,
	limitTotalColumns,
	statisticColumns
} from './limit-set-mapping';

/** `kept-in-use`: the stored figures differ, but assessments rest on them, so they stand. */
export type StoreOutcome = 'added' | 'unchanged' | 'replaced' | 'kept-in-use';

/** SHA-256 over the content of a set without any database id, so that equal figures have equal hashes. */
export function limitSetSha256(set: LimitSet): string {
	const content = JSON.stringify(set, (name: string, value: unknown) => (name === 'id' ? undefined : value));
	return createHash('sha256').update(content).digest('hex');
}

async function insertTables(db: Db, set: LimitSet, setId: number): Promise<void> {
	for (const [position, table] of set.tables.entries()) {
		const [inserted] = await db('limit_tables')
			.insert(limitTableColumns(table, setId, position))
			.returning('id');
		const tableId = (inserted as { id: number }).id;
		const rows = table.rows.map((row, index) => limitRowColumns(row, tableId, index));
		const totals = table.totals.map((total, index) => limitTotalColumns(total, tableId, index));
		const rules = table.statistics.map((rule, index) => statisticColumns(rule, tableId, index));
		if (rows.length > 0) await db.batchInsert('limit_rows', rows, 40);
		if (totals.length > 0) await db.batchInsert('limit_totals', totals, 40);
		if (rules.length > 0) await db.batchInsert('limit_statistics', rules, 40);
	}
}

/**
 * Writes one published set, whole or not at all. Running it again changes nothing; a changed data file replaces
 * the figures under the same id, but never under an assessment that was made with them.
 */
export async function storePublishedLimitSet(db: Db, set: LimitSet, now: Date): Promise<StoreOutcome> {
	const sha256 = limitSetSha256(set);
	return db.transaction(async (trx): Promise<StoreOutcome> => {
		const existing: { id: number; source_sha256: string } | undefined = await trx('limit_sets')
			.whereNull('practice_id')
			.where('key', set.key)
			.first('id', 'source_sha256');
		const columns = limitSetColumns({ ...set, practiceId: null }, sha256);
		if (existing === undefined) {
			const [inserted] = await trx('limit_sets')
				.insert({ ...columns, created_at: now.toISOString() })
				.returning('id');
			await insertTables(trx, set, (inserted as { id: number }).id);
			return 'added';
		}
		if (existing.source_sha256 === sha256) return 'unchanged';
		const used: unknown = await trx('assessments').where('limit_set_id', existing.id).first('id');
		if (used !== undefined) return 'kept-in-use';
		await trx('limit_tables').where('limit_set_id', existing.id).delete();
		await trx('limit_sets').where('id', existing.id).update(columns);
		await insertTables(trx, set, existing.id);
		return 'replaced';
	});
}
