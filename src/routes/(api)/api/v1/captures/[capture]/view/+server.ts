import { json } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

/** Channels, time axis, levels, events and flagged intervals: what there is to fetch tiles for. */
export const GET = guard('capture.read', async (event: RequestEvent, actor) =>
	json(await container().services.viewer.view(actor, event.params.capture), {
		headers: { 'cache-control': 'private, no-cache' }
	})
);
