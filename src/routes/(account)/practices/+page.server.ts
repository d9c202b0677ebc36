import { redirect, type RequestEvent } from '@sveltejs/kit';
import { homePath } from '$lib/access/home-path';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('account.manage', async (_event: PageServerLoadEvent, actor) => ({
	places: (await container().services.account.places(actor)).map((place) => ({
		membershipId: place.actor.membershipId,
		practiceName: place.actor.practiceName,
		role: place.actor.role,
		clientName: place.clientName,
		current: place.actor.membershipId === actor.membershipId
	}))
}));

export const actions = {
	default: guard('account.manage', async (event: RequestEvent, actor) => {
		const membershipId = String((await event.request.formData()).get('membership'));
		const { account } = container().services;
		const place = await account.choosePlace(actor, event.locals.sessionId ?? '', membershipId);
		redirect(303, homePath(place.actor));
	})
};
