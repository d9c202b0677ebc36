import type { ActionRow } from '../db/rows';
import type { Db } from '../db/database';
import type { ClientScope } from '../repositories/acknowledgements.repository';

export interface PortalAction extends Pick<
	ActionRow,
	| 'id'
	| 'title'
	| 'detail'
	| 'priority'
	| 'side'
	| 'responsible'
	| 'due_on'
	| 'status'
	| 'done_at'
	| 'done_note'
> {
	siteName: string;
	siteId: string;
}

/** Published actions of the organisation: what is open first, by due date; then what is done. */
export async function portalActions(
	db: Db,
	scope: ClientScope,
	filter: { status: 'open' | 'all' }
): Promise<PortalAction[]> {
	const query = db('actions as a')
		.join('sites as t', 't.id', 'a.site_id')
		.where({ 'a.practice_id': scope.practiceId, 'a.client_id': scope.clientId })
		.whereNotNull('a.published_at')
		.select<PortalAction[]>(
			'a.id',
			'a.title',
			'a.detail',
			'a.priority',
			'a.side',
			'a.responsible',
			'a.due_on',
			'a.status',
			'a.done_at',
			'a.done_note',
			't.name as siteName',
			't.id as siteId'
		)
		.orderByRaw(
			"case a.status when 'open' then 0 when 'done' then 1 else 2 end, a.due_on is null, a.due_on, a.position"
		);
	if (filter.status === 'open') void query.where('a.status', 'open');
	return query;
}
