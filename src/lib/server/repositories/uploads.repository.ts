import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { UploadRow } from '../db/rows';
import type { Scope } from './scope';

/** Files of one practice that have arrived and wait to become a capture. */
export function uploadsRepository(db: Db, scope: Scope) {
	const own = () => db('uploads').where({ practice_id: scope.practiceId });
	return {
		async add(upload: Omit<UploadRow, 'id' | 'practice_id'>): Promise<string> {
			const id = newId();
			await db('uploads').insert({ ...upload, id, practice_id: scope.practiceId });
			return id;
		},
		/** Those of the given uploads that exist in the survey, in the order asked for. */
		async ofSurvey(surveyId: string, ids: readonly string[]): Promise<UploadRow[]> {
			const rows = await own().where({ survey_id: surveyId }).whereIn('id', ids);
			return ids.flatMap((id) => rows.find((row) => row.id === id) ?? []);
		},
		async remove(ids: readonly string[]): Promise<void> {
			await own().whereIn('id', ids).delete();
		},
		/** Uploads of a survey that nothing has claimed since `before`. */
		async removeForgotten(surveyId: string, before: Date): Promise<void> {
			await own().where({ survey_id: surveyId }).where('created_at', '<', before.toISOString()).delete();
		}
	};
}
