import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';
import { parseReadingsQuery } from './readings-query';

export const load = guard('capture.read', async (event: PageServerLoadEvent, actor) => {
	const { capture, ...asked } = parseReadingsQuery(event.url.searchParams);
	return container().services.readings.page(actor, event.params.survey, capture, asked);
});
