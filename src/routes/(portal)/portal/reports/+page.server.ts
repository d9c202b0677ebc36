import { z } from 'zod';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { PORTAL_PAGE_SIZE } from '$lib/server/read-models/portal-reports';
import type { PageServerLoadEvent } from './$types';

const filterSchema = z.object({
	show: z.enum(['all', 'waiting']).catch('all'),
	site: z.string().nullable().catch(null),
	page: z.coerce.number().int().min(1).catch(1)
});

export const load = guard('portal.read', async ({ url }: PageServerLoadEvent, actor) => {
	const { portal } = container().services;
	const { show, site, page } = filterSchema.parse(Object.fromEntries(url.searchParams));
	const [list, waiting] = await Promise.all([
		portal.reports(actor, { show, siteId: site ?? null, page }),
		portal.reports(actor, { show: 'waiting', siteId: null, page: 1 })
	]);
	return { ...list, show, page, pageSize: PORTAL_PAGE_SIZE, waiting: waiting.total };
});
