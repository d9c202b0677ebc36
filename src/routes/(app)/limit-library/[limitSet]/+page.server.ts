import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('limits.read', async ({ params }: PageServerLoadEvent, actor) => {
	return { limitSet: await container().services.limitLibrary.set(actor, Number(params.limitSet)) };
});
