import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('register.read', async ({ url }: PageServerLoadEvent, actor) => {
	const q = (url.searchParams.get('q') ?? '').trim();
	return { q, groups: await container().services.register.search(actor, q) };
});
