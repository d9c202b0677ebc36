import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { withoutTables } from '$lib/register/limit-set-suggestion';
import { pointFormSchema } from '$lib/register/point-form';
import { pointFactsFromForm, pointFormFromFacts } from '$lib/register/point-form-facts';
import { countryOfTimeZone } from '$lib/register/time-zones';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { ownPath } from '$lib/server/auth/own-path';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

/** Where the form came from: the point's page, or the survey that needed a fact. */
function backTo(url: URL, params: { client: string; site: string; point: string }): string {
	return ownPath(
		url.searchParams.get('back'),
		`/clients/${params.client}/sites/${params.site}/points/${params.point}`
	);
}

export const load = guard('register.write', async (event: PageServerLoadEvent, actor) => {
	const { client, site, point: pointId } = event.params;
	const { register } = container().services;
	const point = await register.pointPage(actor, client, site, pointId);
	const { limitSets } = await register.pointForm(actor, client, site);
	return {
		point: { id: point.id, name: point.facts.name },
		site: { id: point.site.id, name: point.site.name, client: point.site.client },
		surveys: point.surveys.length,
		back: backTo(event.url, event.params),
		country: countryOfTimeZone(point.site.time_zone),
		limitSets: limitSets.map(withoutTables),
		form: await superValidate(pointFormFromFacts(point.facts), zod4(pointFormSchema))
	};
});

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(pointFormSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			const { client, site, point } = event.params;
			const facts = pointFactsFromForm(form.data);
			await container().services.register.updatePoint(actor, client, site, point, facts);
			return backTo(event.url, event.params);
		});
	})
};
