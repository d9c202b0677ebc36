import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import {
	EMPTY_INSTRUMENT,
	instrumentFactsFromForm,
	instrumentFormSchema
} from '$lib/register/instrument-form';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (_event: PageServerLoadEvent, actor) => ({
	sensors: await container().services.sensors.choices(actor),
	form: await superValidate(EMPTY_INSTRUMENT, zod4(instrumentFormSchema), { errors: false })
}));

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(instrumentFormSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			const facts = instrumentFactsFromForm(form.data);
			return `/instruments/${await container().services.instruments.create(actor, facts)}`;
		});
	})
};
