import type { Db } from '../db/database';
import type { Scope } from '../repositories/scope';

/** A capture of the practice that was made from a file of a given content. */
export interface HeldOriginal {
	captureId: string;
	captureName: string;
	surveyId: string;
	surveyNumber: string;
	size_bytes: number;
	/** True when it lies in the survey asked about. */
	here: boolean;
}

/** Where the practice holds a content already, this survey first; null where it does not. */
export async function heldOriginal(
	db: Db,
	scope: Scope,
	surveyId: string,
	sha256: string
): Promise<HeldOriginal | null> {
	const query = db('capture_files')
		.join('captures', 'captures.id', 'capture_files.capture_id')
		.join('surveys', 'surveys.id', 'captures.survey_id')
		.where('capture_files.practice_id', scope.practiceId)
		.where('capture_files.sha256', sha256)
		.whereNull('captures.removed_at');
	if (scope.clientId !== undefined) void query.where('captures.client_id', scope.clientId);
	const row = await query
		.orderByRaw('surveys.id = ? desc', [surveyId])
		.orderBy('captures.created_at')
		.select<Omit<HeldOriginal, 'here'>[]>({
			captureId: 'captures.id',
			captureName: 'captures.name',
			surveyId: 'surveys.id',
			surveyNumber: 'surveys.number',
			size_bytes: 'capture_files.size_bytes'
		})
		.first();
	return row ? { ...row, here: row.surveyId === surveyId } : null;
}
