import type { Actor } from '../../../access/access';
import { isEditable } from '../../../report/revision-status';
import { AppError } from '../../app-error';
import type { ReportRevisionRow } from '../../db/rows';

/** Why a revision cannot be edited now; null when it can. */
export function whyNotEditable(status: ReportRevisionRow['status']): string | null {
	if (isEditable(status)) return null;
	if (status === 'in-check')
		return 'This revision is in check. The checker returns it before it can be edited again.';
	return 'An issued revision cannot be edited. Start a new revision to correct it.';
}

export function requireEditable(revision: Pick<ReportRevisionRow, 'status'>): void {
	const why = whyNotEditable(revision.status);
	if (why !== null) throw new AppError('conflict', why);
}

export function requireInCheck(revision: Pick<ReportRevisionRow, 'status'>): void {
	if (revision.status !== 'in-check')
		throw new AppError(
			'conflict',
			'This revision is not in check any more. Load the page again to see where it stands.'
		);
}

/** Nobody is the sole check of their own work, unless the practice allows it; then the report says so. */
export function whyNotChecker(
	actor: Pick<Actor, 'userId'>,
	revision: Pick<ReportRevisionRow, 'prepared_by'>,
	allowSelfCheck: boolean
): string | null {
	if (revision.prepared_by !== actor.userId || allowSelfCheck) return null;
	return 'You prepared this revision. Another person with the right to check has to issue it.';
}

export function requireChecker(
	actor: Pick<Actor, 'userId'>,
	revision: Pick<ReportRevisionRow, 'prepared_by'>,
	allowSelfCheck: boolean
): void {
	const why = whyNotChecker(actor, revision, allowSelfCheck);
	if (why !== null) throw new AppError('forbidden', why);
}
