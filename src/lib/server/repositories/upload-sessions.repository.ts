import type { Db } from '../db/database';
import type { UploadSessionRow } from '../db/rows';
import type { Scope } from './scope';

/** Files of one practice on their way in pieces; their bytes lie in the receiving folder under the session's id. */
export function uploadSessionsRepository(db: Db, scope: Scope) {
	const own = () => db('upload_sessions').where({ practice_id: scope.practiceId });
	return {
		async add(session: Omit<UploadSessionRow, 'practice_id'>): Promise<void> {
			await db('upload_sessions').insert({ ...session, practice_id: scope.practiceId });
		},
		async byId(surveyId: string, id: string): Promise<UploadSessionRow | null> {
			return (await own().where({ survey_id: surveyId, id }).first()) ?? null;
		},
		/** Those of one person that still wait for bytes, the latest first. */
		async unfinished(surveyId: string, userId: string): Promise<UploadSessionRow[]> {
			return own()
				.where({ survey_id: surveyId, uploaded_by: userId, status: 'receiving' })
				.orderBy('updated_at', 'desc');
		},
		async update(
			id: string,
			change: Partial<
				Pick<UploadSessionRow, 'received_bytes' | 'status' | 'problem' | 'upload_id' | 'updated_at'>
			>
		): Promise<void> {
			await own().where({ id }).update(change);
		},
		async remove(id: string): Promise<void> {
			await own().where({ id }).delete();
		},
		/** Bytes that are on their way and will be kept when they arrive. */
		async expected_bytes(exceptId: string | null = null): Promise<number> {
			const query = own().where({ status: 'receiving' });
			if (exceptId !== null) void query.whereNot({ id: exceptId });
			const row = await query.sum<{ total: number | null }>({ total: 'size_bytes' }).first();
			return Number(row?.total ?? 0);
		}
	};
}

/** Sessions of any practice that have not moved since `before`, for the sweep of the installation. */
export async function staleUploadSessions(db: Db, before: Date): Promise<UploadSessionRow[]> {
	return db('upload_sessions').where('updated_at', '<', before.toISOString());
}

export async function removeUploadSession(db: Db, id: string): Promise<void> {
	await db('upload_sessions').where({ id }).delete();
}
