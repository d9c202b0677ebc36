import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { newSurveySchema, suggestSurveyTitle } from '$lib/register/survey-facts';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (event: PageServerLoadEvent, actor) => {
	const { clock, services } = container();
	const choices = await services.surveys.choices(actor);
	const now = clock();
	const points = choices.points.map((point) => ({
		...point,
		suggestedTitle: suggestSurveyTitle(point.siteName, now, point.timeZone)
	}));
	const asked = points.find((point) => point.id === event.url.searchParams.get('point'));
	const initial = {
		pointId: asked?.id ?? '',
		title: asked?.suggestedTitle ?? '',
		// With one instrument there is nothing to choose.
		instrumentId: choices.instruments.length === 1 ? (choices.instruments[0]?.id ?? '') : '',
		notes: ''
	};
	return {
		points,
		instruments: choices.instruments,
		form: await superValidate(initial, zod4(newSurveySchema), { errors: false })
	};
});

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(newSurveySchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(
			form,
			async () => `/surveys/${await container().services.surveys.create(actor, form.data)}`
		);
	})
};
