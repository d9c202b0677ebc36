import type { Config } from '../config';
import type { Db } from '../db/database';
import { uploadSessionsRepository } from '../repositories/upload-sessions.repository';

/** What a practice keeps of its originals, each content counted once; removed captures do not count. */
export interface StorageUse {
	kept_bytes: number;
	/** Announced and on its way. */
	expected_bytes: number;
	/** The smaller of the practice's own and the installation's setting; null where neither says. */
	quota_bytes: number | null;
	/** The practice's own setting alone. */
	ownQuota_bytes: number | null;
}

export async function storageUse(
	db: Db,
	config: Pick<Config, 'storageQuota_bytes'>,
	practiceId: string,
	exceptSessionId: string | null = null
): Promise<StorageUse> {
	const originals = db('capture_files')
		.join('captures', 'captures.id', 'capture_files.capture_id')
		.where('capture_files.practice_id', practiceId)
		.whereNull('captures.removed_at')
		.select('capture_files.sha256', 'capture_files.size_bytes')
		.union(
			(query) => void query.from('uploads').where({ practice_id: practiceId }).select('sha256', 'size_bytes')
		);
	const kept = await db
		.from(originals.as('originals'))
		.sum<{ total: number | null }>({ total: 'size_bytes' })
		.first();
	const practice = await db('practices').where({ id: practiceId }).first('storage_quota_bytes');
	const quotas = [practice?.storage_quota_bytes ?? null, config.storageQuota_bytes].filter(
		(quota) => quota !== null
	);
	return {
		kept_bytes: Number(kept?.total ?? 0),
		expected_bytes: await uploadSessionsRepository(db, { practiceId }).expected_bytes(exceptSessionId),
		ownQuota_bytes: practice?.storage_quota_bytes ?? null,
		quota_bytes: quotas.length === 0 ? null : Math.min(...quotas)
	};
}

export interface LargeCapture {
	id: string;
	name: string;
	surveyId: string;
	surveyNumber: string;
	size_bytes: number;
	createdAt: string;
}

/** The captures whose originals take the most room. */
export async function largestCaptures(db: Db, practiceId: string, most: number): Promise<LargeCapture[]> {
	const rows: LargeCapture[] = await db('captures')
		.join('capture_files', 'capture_files.capture_id', 'captures.id')
		.join('surveys', 'surveys.id', 'captures.survey_id')
		.where('captures.practice_id', practiceId)
		.whereNull('captures.removed_at')
		.groupBy('captures.id')
		.orderBy('size_bytes', 'desc')
		.limit(most)
		.select({
			id: 'captures.id',
			name: 'captures.name',
			surveyId: 'captures.survey_id',
			surveyNumber: 'surveys.number',
			createdAt: 'captures.created_at',
			size_bytes: db.raw('sum(capture_files.size_bytes)')
		});
	return rows;
}
