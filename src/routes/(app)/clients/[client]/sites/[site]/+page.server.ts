import { redirect } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.read', async (event: PageServerLoadEvent, actor) => ({
	page: await container().services.register.sitePage(actor, event.params.client, event.params.site)
}));

export const actions = {
	archive: guard('register.write', async (event: RequestEvent, actor) => {
		const { client, site } = event.params;
		await container().services.register.setSiteArchived(actor, client, site, true);
		redirect(303, `/clients/${client}`);
	}),
	restore: guard('register.write', async (event: RequestEvent, actor) => {
		const { client, site } = event.params;
		await container().services.register.setSiteArchived(actor, client, site, false);
		redirect(303, `/clients/${client}/sites/${site}`);
	})
};
