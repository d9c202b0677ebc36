import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { jobEventStream } from '$lib/server/http/job-event-stream';
import type { RequestEvent } from './$types';

/** Progress of one job as server-sent events, until it ends. */
export const GET = guard('capture.read', async (event: RequestEvent, actor) => {
	const { captures } = container().services;
	// Asked once before the stream opens, so that a job of another practice is simply not found.
	const first = await captures.job(actor, event.params.job);
	return new Response(
		jobEventStream(first, () => captures.job(actor, event.params.job)),
		{
			headers: { 'content-type': 'text/event-stream', 'cache-control': 'no-cache, no-transform' }
		}
	);
});
