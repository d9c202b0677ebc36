import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { withoutTables } from '$lib/register/limit-set-suggestion';
import { pointFormSchema } from '$lib/register/point-form';
import { emptyPointForm, pointFactsFromForm } from '$lib/register/point-form-facts';
import { countryOfTimeZone } from '$lib/register/time-zones';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (event: PageServerLoadEvent, actor) => {
	const { client, site: siteId } = event.params;
	const { site, limitSets, phaseNames } = await container().services.register.pointForm(
		actor,
		client,
		siteId
	);
	const country = countryOfTimeZone(site.time_zone);
	return {
		site: { id: site.id, name: site.name, client: site.client },
		country,
		limitSets: limitSets.map(withoutTables),
		form: await superValidate(emptyPointForm({ phaseNames, country }), zod4(pointFormSchema), {
			errors: false
		})
	};
});

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(pointFormSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			const { client, site } = event.params;
			const facts = pointFactsFromForm(form.data);
			const id = await container().services.register.createPoint(actor, client, site, facts);
			return `/clients/${client}/sites/${site}/points/${id}`;
		});
	})
};
