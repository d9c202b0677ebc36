import { json } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

export const GET = guard('capture.read', async (event: RequestEvent, actor) =>
	json(await container().services.captures.job(actor, event.params.job))
);
