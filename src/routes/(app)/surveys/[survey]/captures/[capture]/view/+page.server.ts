import { redirect } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

/** Seconds out of the address; null when absent or no figure. */
function seconds(parameters: URLSearchParams, name: string): number | null {
	const text = parameters.get(name);
	const value = Number(text);
	return text !== null && text !== '' && Number.isFinite(value) ? value : null;
}

export const load = guard('capture.read', async (event: PageServerLoadEvent, actor) => {
	const { viewer, captures } = container().services;
	const { survey, capture } = await captures.detail(actor, event.params.survey, event.params.capture);
	if (capture.kind === 'trend')
		redirect(303, `/surveys/${survey.id}/readings?capture=${capture.id}&view=heatmap`);
	if (capture.kind !== 'waveform') redirect(303, `/surveys/${survey.id}/captures/${capture.id}`);
	const view = await viewer.view(actor, capture.id);
	const from_s = seconds(event.url.searchParams, 'from_s');
	const to_s = seconds(event.url.searchParams, 'to_s');
	return {
		surveyId: survey.id,
		view,
		preparation: view.pyramid ? null : await viewer.preparation(actor, capture.id),
		first: {
			range: from_s !== null && to_s !== null && to_s > from_s ? { from_s, to_s } : null,
			at_s: seconds(event.url.searchParams, 'at_s')
		}
	};
});

export const actions = {
	prepare: guard('capture.write', async (event: RequestEvent, actor) => {
		const { viewer, captures } = container().services;
		const { capture } = await captures.detail(actor, event.params.survey, event.params.capture);
		await viewer.prepareAgain(actor, capture.id);
		redirect(303, event.url.pathname);
	})
};
