import { redirect } from '@sveltejs/kit';
import { closeSession } from '$lib/server/auth/auth';
import type { Actions, PageServerLoad } from './$types';

/** Signing out takes a POST, so that no picture or link elsewhere can do it; a visit asks. */
export const load: PageServerLoad = ({ locals }) => {
	if (!locals.actor) redirect(303, '/sign-in');
};

export const actions: Actions = {
	default: async (event) => {
		if (event.locals.actor) await closeSession(event);
		redirect(303, '/sign-in?done=signed-out');
	}
};
