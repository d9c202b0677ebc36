import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

/** Lets go of a file that arrived but is not wanted after all. */
export const DELETE = guard('capture.write', async (event: RequestEvent, actor) => {
	await container().services.uploads.discard(actor, event.params.survey, event.params.upload);
	return new Response(null, { status: 204 });
});
