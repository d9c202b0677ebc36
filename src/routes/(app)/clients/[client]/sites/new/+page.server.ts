import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { siteSchema } from '$lib/register/site-facts';
import { timeZoneNames } from '$lib/register/time-zones';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (event: PageServerLoadEvent, actor) => {
	const { client, timeZone } = await container().services.register.newSite(actor, event.params.client);
	const form = await superValidate({ timeZone }, zod4(siteSchema), { errors: false });
	return { client, form, timeZones: timeZoneNames() };
});

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(siteSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			const { client } = event.params;
			const id = await container().services.register.createSite(actor, client, form.data);
			return `/clients/${client}/sites/${id}`;
		});
	})
};
