import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';
import { judgedBySchema } from './schema';

export const load = guard('assessment.read', async (event: PageServerLoadEvent, actor) => {
	event.depends('sinewright:survey');
	const query = event.url.searchParams;
	return {
		verdict: await container().services.assessments.page(actor, event.params.survey, {
			table: query.get('table'),
			showAll: query.get('show') === 'all'
		})
	};
});

const here = (event: RequestEvent) => `/surveys/${event.params.survey}/verdict`;

export const actions = {
	assess: guard('assessment.write', async (event: RequestEvent, actor) => {
		await container().services.assessments.refresh(actor, event.params.survey);
		redirect(303, here(event));
	}),
	judgeBy: guard('assessment.write', async (event: RequestEvent, actor) => {
		const form = judgedBySchema.safeParse(Object.fromEntries(await event.request.formData()));
		if (!form.success) return fail(422, { errors: z.flattenError(form.error).fieldErrors });
		await container().services.assessments.judgeBy(actor, event.params.survey, form.data);
		redirect(303, here(event));
	}),
	report: guard('report.draft', async (event: RequestEvent, actor) => {
		await container().services.reports.createDraft(actor, event.params.survey);
		redirect(303, `/surveys/${event.params.survey}/report`);
	})
};
