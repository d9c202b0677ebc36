import { fail, redirect } from '@sveltejs/kit';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('capture.read', async (_event: PageServerLoadEvent, actor) => ({
	templates: await container().services.tables.templates(actor)
}));

/** Runs a change of one template; what it refuses is shown beside that template. */
async function change(event: RequestEvent, run: (templateId: string, form: FormData) => Promise<void>) {
	const form = await event.request.formData();
	const templateId = String(form.get('template') ?? '');
	try {
		await run(templateId, form);
	} catch (cause) {
		if (cause instanceof AppError && cause.code === 'invalid')
			return fail(cause.status, { templateId, problem: cause.message });
		throw cause;
	}
	redirect(303, '/instruments/table-layouts');
}

export const actions = {
	rename: guard('capture.write', (event: RequestEvent, actor) =>
		change(event, (id, form) =>
			container().services.tables.renameTemplate(actor, id, String(form.get('name') ?? ''))
		)
	),
	archive: guard('capture.write', (event: RequestEvent, actor) =>
		change(event, (id) => container().services.tables.setTemplateArchived(actor, id, true))
	),
	restore: guard('capture.write', (event: RequestEvent, actor) =>
		change(event, (id) => container().services.tables.setTemplateArchived(actor, id, false))
	)
};
