import { redirect } from '@sveltejs/kit';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';

export const load = guard('register.read', async (event: PageServerLoadEvent, actor) => {
	const { client, site, point } = event.params;
	return { point: await container().services.register.pointPage(actor, client, site, point) };
});

export const actions = {
	archive: guard('register.write', async (event: RequestEvent, actor) => {
		const { client, site, point } = event.params;
		await container().services.register.setPointArchived(actor, client, site, point, true);
		redirect(303, `/clients/${client}/sites/${site}`);
	}),
	restore: guard('register.write', async (event: RequestEvent, actor) => {
		const { client, site, point } = event.params;
		await container().services.register.setPointArchived(actor, client, site, point, false);
		redirect(303, `/clients/${client}/sites/${site}/points/${point}`);
	})
};
