import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('portal.read', async (_event: PageServerLoadEvent, actor) => ({
	sites: await container().services.portal.sites(actor)
}));
