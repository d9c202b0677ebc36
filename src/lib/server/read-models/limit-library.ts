import type { Provenance } from '../../limits/limit-set';
import type { Db } from '../db/database';
import type { Scope } from '../repositories/scope';
import { likePattern, type ListPage, type ListQuery } from './list-query';

export const LIMIT_SET_SORTS = ['standard', 'jurisdiction', 'tables'] as const;
export type LimitSetSort = (typeof LIMIT_SET_SORTS)[number];

export interface LimitSetListRow {
	id: number;
	standard: string;
	edition: string;
	title: string;
	jurisdiction: string;
	status: string;
	/** True for a set of the practice's own, false for a published edition. */
	own: boolean;
	tables: number;
	/** Provenances that occur among the set's tables. */
	provenances: Provenance[];
}

interface Row {
	id: number;
	standard: string;
	edition: string;
	title: string;
	jurisdiction: string;
	status: string;
	practice_id: string | null;
	tables: number;
	provenances: string | null;
}

const ORDER: Record<LimitSetSort, string> = {
	standard: 'l.standard collate nocase',
	jurisdiction: 'l.jurisdiction collate nocase',
	tables: 'tables'
};

/** Limit sets that the practice may use: published editions and its own, never another's. */
export async function listLimitSets(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	query: ListQuery<LimitSetSort>
): Promise<ListPage<LimitSetListRow>> {
	const matching = () => {
		const sets = db('limit_sets as l').where((either) =>
			either.whereNull('l.practice_id').orWhere('l.practice_id', scope.practiceId)
		);
		if (query.q !== '') {
			const pattern = likePattern(query.q);
			void sets.andWhereRaw(
				"(l.standard || ' ' || l.edition like ? escape '\\' or l.title like ? escape '\\' or l.jurisdiction like ? escape '\\')",
				[pattern, pattern, pattern]
			);
		}
		return sets;
	};
	const counted = await matching().count<{ n: number }[]>({ n: '*' }).first();
	const rows = await matching()
		.select<Row[]>(
			...['id', 'standard', 'edition', 'title', 'jurisdiction', 'status', 'practice_id'].map(
				(name) => `l.${name}`
			),
			db.raw('(select count(*) from limit_tables as t where t.limit_set_id = l.id) as tables'),
			db.raw(
				'(select group_concat(distinct t.provenance) from limit_tables as t where t.limit_set_id = l.id) as provenances'
			)
		)
		.orderByRaw(
			`${ORDER[query.sort]} ${query.descending ? 'desc' : 'asc'}, l.standard collate nocase, l.edition desc, l.id`
		)
		.limit(query.pageSize)
		.offset((query.page - 1) * query.pageSize);
	return {
		rows: rows.map(({ practice_id, provenances, ...row }) => ({
			...row,
			own: practice_id !== null,
			provenances: (provenances ?? '').split(',').filter(Boolean) as Provenance[]
		})),
		total: counted?.n ?? 0,
		page: query.page,
		pageSize: query.pageSize
	};
}
