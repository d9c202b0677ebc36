import { z } from 'zod';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { QUERY_PAGE_SIZE } from '$lib/server/services/queries.service';
import type { PageServerLoadEvent } from './$types';

const filterSchema = z.object({
	status: z.enum(['open', 'answered', 'closed']).nullable().catch(null),
	page: z.coerce.number().int().min(1).catch(1)
});

export const load = guard('report.read', async ({ url }: PageServerLoadEvent, actor) => {
	const filter = filterSchema.parse({
		status: url.searchParams.get('status'),
		page: url.searchParams.get('page') ?? 1
	});
	return {
		...(await container().services.queries.list(actor, filter)),
		...filter,
		pageSize: QUERY_PAGE_SIZE
	};
});
