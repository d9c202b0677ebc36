import type { Db } from '../db/database';
import type { Scope } from '../repositories/scope';
import { likePattern, type ListPage, type ListQuery } from './list-query';

export const CLIENT_SORTS = ['name', 'sites', 'surveys', 'latest'] as const;
export type ClientSort = (typeof CLIENT_SORTS)[number];

export interface ClientListRow {
	id: string;
	name: string;
	contactName: string;
	contactEmail: string;
	sites: number;
	surveys: number;
	/** Instant at which a survey of theirs was last worked on; null when there is none. */
	latest: string | null;
	archivedAt: string | null;
}

/** Clients of the practice with how much is kept about each. */
export async function listClients(
	db: Db,
	scope: Scope,
	query: ListQuery<ClientSort> & { archived: boolean }
): Promise<ListPage<ClientListRow>> {
	const matching = () => {
		const clients = db('clients as c').where('c.practice_id', scope.practiceId);
		if (scope.clientId !== undefined) void clients.andWhere('c.id', scope.clientId);
		void (query.archived ? clients.whereNotNull('c.archived_at') : clients.whereNull('c.archived_at'));
		if (query.q !== '')
			void clients.andWhereRaw(
				"(c.name like ? escape '\\' or c.contact_name like ? escape '\\' or c.contact_email like ? escape '\\')",
				[likePattern(query.q), likePattern(query.q), likePattern(query.q)]
			);
		return clients;
	};
	const counted = await matching().count<{ n: number }[]>({ n: '*' }).first();
	const counts = [
		db('sites as s').whereRaw('s.client_id = c.id').whereNull('s.archived_at').count('*').as('sites'),
		db('surveys as v').whereRaw('v.client_id = c.id').count('*').as('surveys'),
		db('surveys as v').whereRaw('v.client_id = c.id').max('v.updated_at').as('latest')
	];
	const rows: ClientListRow[] = await matching()
		.select({
			id: 'c.id',
			name: 'c.name',
			contactName: 'c.contact_name',
			contactEmail: 'c.contact_email',
			archivedAt: 'c.archived_at'
		})
		.select<ClientListRow[]>(...counts)
		.orderByRaw(
			query.sort === 'name'
				? `c.name collate nocase ${query.descending ? 'desc' : 'asc'}`
				: `${query.sort} ${query.descending ? 'desc' : 'asc'}, c.name collate nocase`
		)
		.limit(query.pageSize)
		.offset((query.page - 1) * query.pageSize);
	return { rows, total: counted?.n ?? 0, page: query.page, pageSize: query.pageSize };
}
