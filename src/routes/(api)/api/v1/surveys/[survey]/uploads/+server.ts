import { json } from '@sveltejs/kit';
import type { ReadableStream as WebReadableStream } from 'node:stream/web';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

/** One file as the raw body, streamed into storage. The client sends application/octet-stream. */
export const PUT = guard('capture.write', async (event: RequestEvent, actor) => {
	const received = await container().services.uploads.receive(
		actor,
		event.params.survey,
		event.url.searchParams.get('name') ?? '',
		event.request.body as WebReadableStream<Uint8Array> | null
	);
	return json(received, { status: 201 });
});
