import type { Actor } from '../../access/access';
import type { Db } from '../db/database';

export interface AuditEntry {
	/** Verb in past tense with its noun, e.g. "report.issued", "capture.uploaded". */
	action: string;
	subjectKind: string;
	subjectId: string;
	detail?: Record<string, unknown>;
}

/** Appends to the history inside the caller's transaction: the deed and its record stand or fall together. */
export async function appendAudit(
	trx: Db,
	actor:
		Pick<Actor, 'userId' | 'name' | 'practiceId'> | { userId: null; name: string; practiceId: string | null },
	entry: AuditEntry,
	now: Date,
	requestId: string | null = null
): Promise<void> {
	await trx('audit_events').insert({
		practice_id: actor.practiceId,
		actor_user_id: actor.userId,
		actor_name: actor.name,
		action: entry.action,
		subject_kind: entry.subjectKind,
		subject_id: entry.subjectId,
		detail_json: JSON.stringify(entry.detail ?? {}),
		request_id: requestId,
		at: now.toISOString()
	});
}
