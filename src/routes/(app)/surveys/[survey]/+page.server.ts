import { redirect } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

/** A survey opens where its work goes on. */
export const load = guard('register.read', async (event: PageServerLoadEvent, actor) => {
	const { next } = await container().services.surveys.header(actor, event.params.survey);
	redirect(303, `/surveys/${event.params.survey}/${next}`);
});
