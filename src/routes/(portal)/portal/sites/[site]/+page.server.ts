import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('portal.read', async ({ params }: PageServerLoadEvent, actor) => ({
	site: await container().services.portal.site(actor, params.site)
}));
