import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { AcknowledgementRow } from '../db/rows';

export interface ClientScope {
	practiceId: string;
	clientId: string;
}

/** Acknowledgements of one client organisation; appended, never altered. */
export function acknowledgementsRepository(db: Db, scope: ClientScope) {
	const mine = () =>
		db('acknowledgements').where({ practice_id: scope.practiceId, client_id: scope.clientId });

	return {
		ofRevision: (revisionId: string): Promise<AcknowledgementRow[]> =>
			mine().where({ revision_id: revisionId }).orderBy('acknowledged_at'),

		byPerson: (revisionId: string, userId: string): Promise<AcknowledgementRow | undefined> =>
			mine().where({ revision_id: revisionId, user_id: userId }).first(),

		async add(entry: {
			revisionId: string;
			userId: string;
			typedName: string;
			statement: string;
			pdfSha256: string;
			acknowledgedAt: string;
		}): Promise<string> {
			const id = newId();
			await db('acknowledgements').insert({
				id,
				practice_id: scope.practiceId,
				client_id: scope.clientId,
				revision_id: entry.revisionId,
				user_id: entry.userId,
				typed_name: entry.typedName,
				statement: entry.statement,
				pdf_sha256: entry.pdfSha256,
				acknowledged_at: entry.acknowledgedAt
			});
			return id;
		}
	};
}
