import { countChecks } from '$lib/checks/check-counts';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { CAPTURE_SORTS } from '$lib/server/read-models/capture-list';
import { parseListQuery } from '$lib/server/read-models/list-query';
import type { PageServerLoadEvent } from './$types';

export const load = guard('capture.read', async (event: PageServerLoadEvent, actor) => {
	const query = parseListQuery(event.url.searchParams, CAPTURE_SORTS, '-created');
	const { survey, captures, jobs } = await container().services.captures.list(
		actor,
		event.params.survey,
		query
	);
	const checked = await container().services.checks.ofSurvey(actor, event.params.survey);
	const checks = Object.fromEntries(checked.captures.map((one) => [one.id, countChecks(one.checks)]));
	return { checks, timeZone: survey.timeZone, surveyId: survey.id, captures, jobs, query };
});
