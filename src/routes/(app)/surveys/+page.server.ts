import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { parseSurveyListQuery } from '$lib/server/read-models/survey-list';
import type { PageServerLoadEvent } from './$types';

export const load = guard('register.read', async ({ url }: PageServerLoadEvent, actor) => {
	const query = parseSurveyListQuery(url.searchParams);
	return { query, list: await container().services.surveys.list(actor, query) };
});
