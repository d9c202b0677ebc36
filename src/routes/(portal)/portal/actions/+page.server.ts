import { fail, type RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import { actionDoneForm } from '$lib/portal/acknowledgement';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

const show = z.enum(['open', 'all']).catch('open');

export const load = guard('portal.read', async ({ url }: PageServerLoadEvent, actor) => {
	const status = show.parse(url.searchParams.get('show'));
	return {
		status,
		practice: actor.practiceName,
		list: await container().services.portal.actions(actor, { status })
	};
});

export const actions = {
	done: guard('portal.act', async (event: RequestEvent, actor) => {
		const form = actionDoneForm.safeParse(Object.fromEntries(await event.request.formData()));
		if (!form.success) return fail(422, { form: 'done', errors: z.flattenError(form.error).fieldErrors });
		await container().services.portal.completeAction(
			actor,
			form.data.actionId,
			form.data.note,
			event.locals.requestId
		);
		return { form: 'done', done: true };
	})
};
