import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { CaptureFileRow, CaptureRow } from '../db/rows';
import type { Scope } from './scope';

export interface NewCapture {
	capture: Omit<
		CaptureRow,
		| 'id'
		| 'practice_id'
		| 'status'
		| 'mappings_json'
		| 'problem'
		| 'removed_at'
		| 'updated_at'
		| 'layout_json'
		| 'layout_template_id'
		| 'instrument_id'
		| 'pyramid_sha256'
		| 'pyramid_json'
	> &
		Partial<Pick<CaptureRow, 'status' | 'problem' | 'layout_json' | 'layout_template_id' | 'instrument_id'>>;
	files: { name: string; sha256: string; size_bytes: number }[];
}

/** Captures and their files of one practice (and of one client when given). Removed ones are not seen. */
export function capturesRepository(db: Db, scope: Scope) {
	const own = () => {
		const query = db('captures').where({ practice_id: scope.practiceId }).whereNull('removed_at');
		return scope.clientId === undefined ? query : query.where({ client_id: scope.clientId });
	};

	return {
		async byId(id: string): Promise<CaptureRow | null> {
			return (await own().where({ id }).first()) ?? null;
		},
		async ofSurvey(surveyId: string): Promise<CaptureRow[]> {
			return own().where({ survey_id: surveyId }).orderBy('created_at').orderBy('id');
		},
		async filesOf(captureIds: readonly string[]): Promise<CaptureFileRow[]> {
			return db('capture_files')
				.where({ practice_id: scope.practiceId })
				.whereIn('capture_id', captureIds)
				.orderBy(['capture_id', 'position']);
		},
		/** The capture of the survey that was made from exactly these contents, whatever the files were called. */
		async withSameContent(surveyId: string, sha256s: readonly string[]): Promise<CaptureRow | null> {
			const captures = await own().where({ survey_id: surveyId });
			const files = await this.filesOf(captures.map((capture) => capture.id));
			const wanted = [...sha256s].sort().join();
			const twin = captures.find((capture) => {
				const hashes = files.filter((file) => file.capture_id === capture.id).map((file) => file.sha256);
				return hashes.sort().join() === wanted;
			});
			return twin ?? null;
		},
		async add({ capture, files }: NewCapture): Promise<string> {
			const id = newId();
			await db('captures').insert({
				status: 'recognised',
				...capture,
				id,
				practice_id: scope.practiceId,
				updated_at: capture.created_at
			});
			for (const [position, file] of files.entries())
				await db('capture_files').insert({
					...file,
					id: newId(),
					practice_id: scope.practiceId,
					capture_id: id,
					position
				});
			return id;
		},
		async update(
			id: string,
			change: Partial<
				Pick<
					CaptureRow,
					| 'name'
					| 'kind'
					| 'variant'
					| 'status'
					| 'facts_json'
					| 'mappings_json'
					| 'started_at'
					| 'duration_s'
					| 'problem'
					| 'removed_at'
					| 'layout_json'
					| 'layout_template_id'
					| 'instrument_id'
					| 'pyramid_sha256'
					| 'pyramid_json'
				>
			>,
			now: Date
		): Promise<void> {
			await own()
				.where({ id })
				.update({ ...change, updated_at: now.toISOString() });
		}
	};
}
