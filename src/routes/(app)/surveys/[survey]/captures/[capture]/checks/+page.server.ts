import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('capture.read', async (event: PageServerLoadEvent, actor) => {
	event.depends('sinewright:survey');
	const { services } = container();
	const { survey: surveyId, capture: captureId } = event.params;
	const { survey, capture } = await services.captures.detail(actor, surveyId, captureId);
	const checks = await services.checks.ofSurvey(actor, surveyId);
	return {
		surveyId,
		timeZone: survey.timeZone,
		capture: { id: capture.id, name: capture.name },
		own: checks.captures.find(({ id }) => id === captureId)?.checks ?? [],
		together: checks.together
	};
});

const overruleForm = z.object({
	/** Empty for a check of the captures together. */
	captureId: z.string(),
	code: z.string().min(1),
	channelIndex: z.union([z.literal(''), z.coerce.number().int().min(0)]),
	sentence: z.string().min(1),
	reason: z.string()
});

const here = (event: RequestEvent) =>
	`/surveys/${event.params.survey}/captures/${event.params.capture}/checks`;

export const actions = {
	overrule: guard('capture.write', async (event: RequestEvent, actor) => {
		const form = overruleForm.safeParse(Object.fromEntries(await event.request.formData()));
		if (!form.success)
			return fail(422, { key: '', reason: '', problem: 'Choose a check and state a reason.' });
		const { captureId, code, channelIndex, sentence, reason } = form.data;
		try {
			await container().services.checks.overrule(
				actor,
				event.params.survey,
				{
					captureId: captureId === '' ? null : captureId,
					code,
					sentence,
					channelIndex: channelIndex === '' ? null : channelIndex
				},
				reason
			);
		} catch (cause) {
			if (cause instanceof AppError && (cause.code === 'invalid' || cause.code === 'conflict'))
				return fail(cause.status, {
					key: [captureId, code, channelIndex].join('/'),
					reason,
					problem: cause.message
				});
			throw cause;
		}
		redirect(303, here(event));
	}),

	takeBack: guard('capture.write', async (event: RequestEvent, actor) => {
		const form = await event.request.formData();
		try {
			await container().services.checks.takeBack(
				actor,
				event.params.survey,
				String(form.get('overrule') ?? '')
			);
		} catch (cause) {
			if (cause instanceof AppError && cause.code === 'conflict')
				return fail(409, { key: '', reason: '', problem: cause.message });
			throw cause;
		}
		redirect(303, here(event));
	})
};
