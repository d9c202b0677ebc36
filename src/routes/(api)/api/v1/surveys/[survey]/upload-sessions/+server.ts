import { json } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { answerResumableUpload } from '$lib/server/http/resumable-upload';
import type { RequestEvent } from './$types';

/** Files of this person that broke off on their way into the survey. */
export const GET = guard('capture.write', async (event: RequestEvent, actor) =>
	json(await container().services.receiving.interrupted(actor, event.params.survey))
);

/** Begins a file that is sent in pieces (tus 1.0, extension "creation"). */
export const POST = guard('capture.write', async (event: RequestEvent, actor) => {
	await container().services.receiving.interrupted(actor, event.params.survey);
	return answerResumableUpload(event.request, actor, event.params.survey);
});
