import { json } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

/** Says that the last piece was sent: the file is checked against its SHA-256 and kept. May be repeated. */
export const POST = guard('capture.write', async (event: RequestEvent, actor) => {
	const { survey, session } = event.params;
	return json(await container().services.receiving.arrive(actor, survey, session), { status: 201 });
});
