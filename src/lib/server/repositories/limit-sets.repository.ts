import type { LimitSet, LimitTable } from '../../limits/limit-set';
import type { Db } from '../db/database';
import type { LimitRowRow, LimitSetRow, LimitStatisticRow, LimitTableRow, LimitTotalRow } from '../db/rows';
import {
	limitRowFrom,
	limitSetFrom,
	limitTableFrom,
	limitTotalFrom,
	statisticFrom
} from './limit-set-mapping';

export interface LimitSetsRepository {
	/** Published editions and the practice's own sets, by standard, newest edition first. */
	list(): Promise<LimitSet[]>;
	byId(id: number): Promise<LimitSet | null>;
	/** The practice's own set of that key before a published one. */
	byKey(key: string): Promise<LimitSet | null>;
}

function groupBy<T>(rows: T[], keyOf: (row: T) => number): Map<number, T[]> {
	const groups = new Map<number, T[]>();
	for (const row of rows) {
		const group = groups.get(keyOf(row));
		if (group === undefined) groups.set(keyOf(row), [row]);
		else group.push(row);
	}
	return groups;
}

/** Tables of the given sets with their rows, in five queries whatever the number of sets. */
async function loadTables(db: Db, setIds: number[]): Promise<Map<number, LimitTable[]>> {
	const tableRows = await db<LimitTableRow>('limit_tables')
		.whereIn('limit_set_id', setIds)
		.orderBy(['limit_set_id', 'position'])
		.select('*');
	const tableIds = tableRows.map((row) => row.id);
	const parts = <R extends object>(name: string): Promise<R[]> =>
		db(name).whereIn('limit_table_id', tableIds).orderBy(['limit_table_id', 'position']).select('*');
	const rows = groupBy(await parts<LimitRowRow>('limit_rows'), (row) => row.limit_table_id);
	const totals = groupBy(await parts<LimitTotalRow>('limit_totals'), (row) => row.limit_table_id);
	const rules = groupBy(await parts<LimitStatisticRow>('limit_statistics'), (row) => row.limit_table_id);
	const tables = new Map<number, LimitTable[]>();
	for (const [setId, group] of groupBy(tableRows, (row) => row.limit_set_id)) {
		tables.set(
			setId,
			group.map((table) =>
				limitTableFrom(table, {
					rows: (rows.get(table.id) ?? []).map(limitRowFrom),
					totals: (totals.get(table.id) ?? []).map(limitTotalFrom),
					statistics: (rules.get(table.id) ?? []).map(statisticFrom)
				})
			)
		);
	}
	return tables;
}

/** Limit sets that one practice may see: published editions and its own, never another's. */
export function limitSetsRepository(db: Db, practiceId: string): LimitSetsRepository {
	const visible = () =>
		db<LimitSetRow>('limit_sets').where((either) =>
			either.whereNull('practice_id').orWhere('practice_id', practiceId)
		);
	const withTables = async (found: LimitSetRow[]): Promise<LimitSet[]> => {
		const tables = await loadTables(
			db,
			found.map((row) => row.id)
		);
		return found.map((row) => limitSetFrom(row, tables.get(row.id) ?? []));
	};
	return {
		list: async () =>
			withTables(
				await visible()
					.orderBy([{ column: 'standard' }, { column: 'edition', order: 'desc' }, { column: 'id' }])
					.select('*')
			),
		byId: async (id) => (await withTables(await visible().where('id', id).select('*')))[0] ?? null,
		byKey: async (key) => {
			const found = await visible().where('key', key).orderByRaw('practice_id is null').limit(1).select('*');
			return (await withTables(found))[0] ?? null;
		}
	};
}
