import { redirect } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.read', async (event: PageServerLoadEvent, actor) => ({
	page: await container().services.register.clientPage(actor, event.params.client),
	mayInvite: actor.role === 'owner'
}));

export const actions = {
	archive: guard('register.write', async (event: RequestEvent, actor) => {
		await container().services.register.setClientArchived(actor, event.params.client, true);
		redirect(303, '/clients');
	}),
	restore: guard('register.write', async (event: RequestEvent, actor) => {
		await container().services.register.setClientArchived(actor, event.params.client, false);
		redirect(303, `/clients/${event.params.client}`);
	})
};
