import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { actionSchema } from '$lib/report/action-facts';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('assessment.read', async (event: PageServerLoadEvent, actor) => {
	event.depends('sinewright:survey');
	return {
		remedies: await container().services.actions.page(actor, event.params.survey),
		editing: event.url.searchParams.get('edit')
	};
});

const here = (event: RequestEvent) => `/surveys/${event.params.survey}/remedies`;

async function fields(event: RequestEvent): Promise<Record<string, string>> {
	return Object.fromEntries(
		[...(await event.request.formData())].map(([key, value]) => [key, String(value)])
	);
}

/** A refusal is a sentence on the page; what was typed stays in its fields. */
async function attempt(event: RequestEvent, values: Record<string, string>, work: () => Promise<unknown>) {
	try {
		await work();
	} catch (cause) {
		if (cause instanceof AppError && cause.code === 'conflict')
			return fail(409, { id: values['id'] ?? '', values, errors: {}, problem: cause.message });
		throw cause;
	}
	redirect(303, here(event));
}

function rejected(values: Record<string, string>, error: z.ZodError) {
	const errors: Record<string, string[] | undefined> = z.flattenError(error).fieldErrors;
	return fail(422, { id: values['id'] ?? '', values, errors, problem: '' });
}

export const actions = {
	add: guard('assessment.write', async (event: RequestEvent, actor) => {
		const values = await fields(event);
		const form = actionSchema.safeParse(values);
		if (!form.success) return rejected(values, form.error);
		return attempt(event, values, () =>
			container().services.actions.add(actor, event.params.survey, form.data)
		);
	}),
	suggest: guard('assessment.write', async (event: RequestEvent, actor) => {
		const values = await fields(event);
		return attempt(event, values, () =>
			container().services.actions.addSuggested(actor, event.params.survey, values['key'] ?? '')
		);
	}),
	update: guard('assessment.write', async (event: RequestEvent, actor) => {
		const values = await fields(event);
		const form = actionSchema.safeParse(values);
		if (!form.success) return rejected(values, form.error);
		return attempt(event, values, () =>
			container().services.actions.update(actor, event.params.survey, values['id'] ?? '', form.data)
		);
	}),
	remove: guard('assessment.write', async (event: RequestEvent, actor) => {
		const values = await fields(event);
		return attempt(event, values, () =>
			container().services.actions.remove(actor, event.params.survey, values['id'] ?? '')
		);
	}),
	move: guard('assessment.write', async (event: RequestEvent, actor) => {
		const values = await fields(event);
		return attempt(event, values, () =>
			container().services.actions.move(
				actor,
				event.params.survey,
				values['id'] ?? '',
				values['by'] === 'up' ? 'up' : 'down'
			)
		);
	}),
	confirm: guard('assessment.write', async (event: RequestEvent, actor) => {
		const values = await fields(event);
		return attempt(event, values, () =>
			container().services.actions.confirm(actor, event.params.survey, values['id'] ?? '')
		);
	}),
	reopen: guard('assessment.write', async (event: RequestEvent, actor) => {
		const values = await fields(event);
		return attempt(event, values, () =>
			container().services.actions.reopen(actor, event.params.survey, values['id'] ?? '')
		);
	})
};
