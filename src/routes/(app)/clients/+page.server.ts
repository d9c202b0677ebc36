import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { CLIENT_SORTS } from '$lib/server/read-models/client-list';
import { parseListQuery } from '$lib/server/read-models/list-query';
import type { PageServerLoadEvent } from './$types';

export const load = guard('register.read', async ({ url }: PageServerLoadEvent, actor) => {
	const query = {
		...parseListQuery(url.searchParams, CLIENT_SORTS, 'name'),
		archived: url.searchParams.get('show') === 'archived'
	};
	return {
		q: query.q,
		archived: query.archived,
		list: await container().services.register.listClients(actor, query)
	};
});
