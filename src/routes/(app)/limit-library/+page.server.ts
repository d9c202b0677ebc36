import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { LIMIT_SET_SORTS } from '$lib/server/read-models/limit-library';
import { parseListQuery } from '$lib/server/read-models/list-query';
import type { PageServerLoadEvent } from './$types';

export const load = guard('limits.read', async ({ url }: PageServerLoadEvent, actor) => {
	const query = parseListQuery(url.searchParams, LIMIT_SET_SORTS, 'standard');
	return { q: query.q, list: await container().services.limitLibrary.list(actor, query) };
});
