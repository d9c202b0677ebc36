import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import {
	instrumentFactsFromForm,
	instrumentFormFromFacts,
	instrumentFormSchema
} from '$lib/register/instrument-form';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (event: PageServerLoadEvent, actor) => {
	const { id, facts } = await container().services.instruments.page(actor, event.params.instrument);
	return {
		instrument: { id, name: facts.name },
		sensors: await container().services.sensors.choices(actor),
		form: await superValidate(instrumentFormFromFacts(facts), zod4(instrumentFormSchema))
	};
});

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(instrumentFormSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			const { instrument } = event.params;
			await container().services.instruments.update(actor, instrument, instrumentFactsFromForm(form.data));
			return `/instruments/${instrument}`;
		});
	})
};
