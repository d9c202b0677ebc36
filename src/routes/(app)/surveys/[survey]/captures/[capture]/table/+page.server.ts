import { fail, redirect } from '@sveltejs/kit';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('capture.write', async (event: PageServerLoadEvent, actor) => {
	const { survey, capture } = event.params;
	const [page, detail] = await Promise.all([
		container().services.tables.page(actor, survey, capture),
		container().services.captures.detail(actor, survey, capture)
	]);
	if (page === null) redirect(303, `/surveys/${survey}/captures/${capture}`);
	return { page, timeZone: detail.survey.timeZone, phaseNames: detail.survey.facts.phaseNames };
});

export const actions = {
	apply: guard('capture.write', async (event: RequestEvent, actor) => {
		const { survey, capture } = event.params;
		const form = await event.request.formData();
		const text = (name: string) => String(form.get(name) ?? '').trim();
		try {
			await container().services.tables.apply(actor, survey, capture, parsed(text('layout')), {
				keepAs: form.get('keep') === null ? null : text('templateName'),
				usedId: text('templateId') || null
			});
		} catch (cause) {
			if (cause instanceof AppError && (cause.code === 'invalid' || cause.code === 'conflict'))
				return fail(cause.status, { problem: cause.message });
			throw cause;
		}
		redirect(303, `/surveys/${survey}/captures/${capture}`);
	})
};

function parsed(json: string): unknown {
	try {
		return JSON.parse(json);
	} catch {
		return null;
	}
}
