import type { Db } from '../db/database';
import type { StoredBlob } from '../storage/blob-store';

/**
 * Index of what lies in blob storage. It belongs to no practice: the rows that refer to a blob do,
 * and nobody reaches a blob except through one of them.
 */
export function storedFilesRepository(db: Db) {
	return {
		/** Records a blob; the same content twice is one row. */
		async record(blob: StoredBlob, mediaType: string, now: Date): Promise<void> {
			await db('stored_files')
				.insert({
					sha256: blob.sha256,
					size_bytes: blob.size_bytes,
					media_type: mediaType,
					created_at: now.toISOString()
				})
				.onConflict('sha256')
				.ignore();
		}
	};
}
