import { fail, redirect, type RequestEvent } from '@sveltejs/kit';
import { questionForm } from '$lib/portal/acknowledgement';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

type ActionEvent = RequestEvent<{ query: string }>;

export const load = guard('report.read', async ({ params }: PageServerLoadEvent, actor) => ({
	thread: await container().services.queries.thread(actor, params.query)
}));

export const actions = {
	answer: guard('report.read', async (event: ActionEvent, actor) => {
		const body = String((await event.request.formData()).get('body') ?? '');
		const form = questionForm.safeParse({ body });
		if (!form.success) return fail(422, { body, errors: ['Write an answer of at least a few words.'] });
		await container().services.queries.reply(
			actor,
			event.params.query,
			form.data.body,
			event.locals.requestId
		);
		return { sent: true };
	}),
	close: guard('report.read', async (event: ActionEvent, actor) => {
		await container().services.queries.close(actor, event.params.query, event.locals.requestId);
		redirect(303, '/queries');
	})
};
