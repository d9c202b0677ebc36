import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { EMPTY_SENSOR, sensorFactsFromForm, sensorFormSchema } from '$lib/register/sensor-form';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (_event: PageServerLoadEvent) => ({
	form: await superValidate(EMPTY_SENSOR, zod4(sensorFormSchema), { errors: false })
}));

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(sensorFormSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			const facts = sensorFactsFromForm(form.data);
			return `/instruments/sensors/${await container().services.sensors.create(actor, facts)}`;
		});
	})
};
