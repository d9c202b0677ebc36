import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { answerResumableUpload } from '$lib/server/http/resumable-upload';
import type { RequestEvent } from './$types';

/** How far a file has arrived (tus 1.0). */
export const HEAD = guard('capture.write', async (event: RequestEvent, actor) => {
	const { survey, session } = event.params;
	await container().services.receiving.session(actor, survey, session);
	return answerResumableUpload(event.request, actor, survey);
});

/** The next piece of a file (tus 1.0). */
export const PATCH = guard('capture.write', async (event: RequestEvent, actor) => {
	const { survey, session } = event.params;
	const { receiving } = container().services;
	await receiving.session(actor, survey, session);
	const answer = await answerResumableUpload(event.request, actor, survey);
	await receiving.noteProgress(actor, session);
	return answer;
});

/** Lets go of a file that has arrived in part, and of its bytes. */
export const DELETE = guard('capture.write', async (event: RequestEvent, actor) => {
	await container().services.receiving.discard(actor, event.params.survey, event.params.session);
	return new Response(null, { status: 204 });
});
