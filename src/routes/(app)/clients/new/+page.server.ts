import { fail } from '@sveltejs/kit';
import { superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { clientSchema } from '$lib/register/client-facts';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { saveForm } from '$lib/server/http/save-form';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.write', async (_event: PageServerLoadEvent) => ({
	form: await superValidate(zod4(clientSchema))
}));

export const actions = {
	default: guard('register.write', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(clientSchema));
		if (!form.valid) return fail(422, { form });
		return saveForm(
			form,
			async () => `/clients/${await container().services.register.createClient(actor, form.data)}`
		);
	})
};
