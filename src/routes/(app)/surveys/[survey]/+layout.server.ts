import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { LayoutServerLoadEvent } from './$types';

/** Title block and rail of the survey, for each of its pages. */
export const load = guard('register.read', async (event: LayoutServerLoadEvent, actor) => {
	event.depends('sinewright:survey');
	return { header: await container().services.surveys.header(actor, event.params.survey) };
});
