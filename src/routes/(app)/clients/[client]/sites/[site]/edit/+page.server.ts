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
	const { client, site: siteId } = event.params;
	const { site } = await container().services.register.sitePage(actor, client, siteId);
	const form = await superValidate(
		{
			name: site.name,
			address: site.address,
			utility: site.utility,
			timeZone: site.time_zone,
			notes: site.notes
		},
		zod4(siteSchema)
	);
	return { site: { id: site.id, name: site.name, client: site.client }, form, timeZones: timeZoneNames() };
});

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(siteSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			const { client, site } = event.params;
			await container().services.register.updateSite(actor, client, site, form.data);
			return `/clients/${client}/sites/${site}`;
		});
	})
};
