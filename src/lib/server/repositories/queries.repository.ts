import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { QueryRow } from '../db/rows';

export interface QueryScope {
	practiceId: string;
	/** Set for a client: only that organisation's questions. */
	clientId?: string;
}

/** Questions about issued reports and the messages in them. */
export function queriesRepository(db: Db, scope: QueryScope) {
	const mine = () => {
		const query = db('queries').where('queries.practice_id', scope.practiceId);
		return scope.clientId === undefined ? query : query.andWhere('queries.client_id', scope.clientId);
	};

	return {
		byId: (id: string): Promise<QueryRow | undefined> => mine().where('queries.id', id).first(),

		async open(entry: {
			clientId: string;
			revisionId: string;
			askedBy: string;
			at: string;
		}): Promise<string> {
			const id = newId();
			await db('queries').insert({
				id,
				practice_id: scope.practiceId,
				client_id: entry.clientId,
				revision_id: entry.revisionId,
				asked_by: entry.askedBy,
				status: 'open',
				created_at: entry.at,
				updated_at: entry.at
			});
			return id;
		},

		async addMessage(entry: { queryId: string; authorId: string; body: string; at: string }): Promise<void> {
			await db('query_messages').insert({
				id: newId(),
				practice_id: scope.practiceId,
				query_id: entry.queryId,
				author_id: entry.authorId,
				body: entry.body,
				created_at: entry.at
			});
		},

		async setStatus(id: string, status: QueryRow['status'], at: string): Promise<void> {
			await mine().where('queries.id', id).update({ status, updated_at: at });
		}
	};
}
