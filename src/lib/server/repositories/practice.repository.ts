import type { Db } from '../db/database';
import type { PracticeRow } from '../db/rows';

export type PracticeSettings = Omit<PracticeRow, 'id' | 'created_at' | 'storage_quota_bytes'>;

/** The practice itself: letterhead and house rules. */
export function practiceRepository(db: Db, scope: { practiceId: string }) {
	return {
		async get(): Promise<PracticeRow> {
			const row = await db('practices').where({ id: scope.practiceId }).first();
			if (!row) throw new Error('an actor always has a practice');
			return row;
		},

		async update(settings: PracticeSettings): Promise<void> {
			await db('practices').where({ id: scope.practiceId }).update(settings);
		},

		async setStorageQuota(quota_bytes: number | null): Promise<void> {
			await db('practices').where({ id: scope.practiceId }).update({ storage_quota_bytes: quota_bytes });
		}
	};
}
