import { json } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

export const POST = guard('capture.write', async (event: RequestEvent, actor) => {
	return json(await container().services.captures.cancelJob(actor, event.params.job));
});
