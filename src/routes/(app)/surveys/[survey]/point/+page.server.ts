import { fail, redirect } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { surveySchema } from '$lib/register/survey-facts';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.read', async (event: PageServerLoadEvent, actor) => {
	const point = await container().services.surveys.point(actor, event.params.survey);
	const { survey } = point;
	const form = await superValidate(
		{
			title: survey.title,
			instrumentId: survey.instrument_id ?? '',
			decisionRule: survey.decision_rule,
			notes: survey.notes
		},
		zod4(surveySchema)
	);
	return { point, form };
});

const here = (event: RequestEvent) => `/surveys/${event.params.survey}/point`;

export const actions = {
	save: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(surveySchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			await container().services.surveys.update(actor, event.params.survey, form.data);
			return here(event);
		});
	}),
	close: guard('register.write', async (event: RequestEvent, actor) => {
		await container().services.surveys.close(actor, event.params.survey);
		redirect(303, here(event));
	}),
	reopen: guard('register.write', async (event: RequestEvent, actor) => {
		await container().services.surveys.reopen(actor, event.params.survey);
		redirect(303, here(event));
	})
};
