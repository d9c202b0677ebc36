import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { clientSchema } from '$lib/register/client-facts';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (event: PageServerLoadEvent, actor) => {
	const { client } = await container().services.register.clientPage(actor, event.params.client);
	const form = await superValidate(
		{
			name: client.name,
			contactName: client.contact_name,
			contactEmail: client.contact_email,
			contactPhone: client.contact_phone,
			address: client.address,
			notes: client.notes
		},
		zod4(clientSchema)
	);
	return { client: { id: client.id, name: client.name }, form };
});

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(clientSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(form, async () => {
			await container().services.register.updateClient(actor, event.params.client, form.data);
			return `/clients/${event.params.client}`;
		});
	})
};
