import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { sensorFactsFromForm, sensorFormFromFacts, sensorFormSchema } from '$lib/register/sensor-form';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (event: PageServerLoadEvent, actor) => {
	const { id, facts } = await container().services.sensors.page(actor, event.params.sensor);
	return {
		sensor: { id, name: facts.name },
		form: await superValidate(sensorFormFromFacts(facts), zod4(sensorFormSchema))
	};
});

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(sensorFormSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			const { sensor } = event.params;
			await container().services.sensors.update(actor, sensor, sensorFactsFromForm(form.data));
			return `/instruments/sensors/${sensor}`;
		});
	})
};
