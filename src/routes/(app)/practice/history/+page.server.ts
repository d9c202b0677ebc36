import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { AUDIT_SORTS } from '$lib/server/read-models/audit-list';
import { parseListQuery } from '$lib/server/read-models/list-query';
import type { PageServerLoadEvent } from './$types';

export const load = guard('practice.manage', async ({ url }: PageServerLoadEvent, actor) => {
	const filter = {
		kind: url.searchParams.get('kind') ?? '',
		actorUserId: url.searchParams.get('who') ?? ''
	};
	const { page, choices } = await container().services.practice.history(actor, {
		...parseListQuery(url.searchParams, AUDIT_SORTS, '-at'),
		...filter
	});
	return {
		filter,
		choices,
		events: {
			...page,
			rows: page.rows.map((row) => ({
				id: row.id,
				at: row.at,
				who: row.actor_name,
				action: row.action,
				kind: row.subject_kind,
				subject: row.subject_id,
				detail: row.detail_json
			}))
		}
	};
});
