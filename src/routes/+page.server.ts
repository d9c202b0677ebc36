import { redirect } from '@sveltejs/kit';
import { homePath } from '$lib/access/home-path';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) => {
	redirect(303, locals.actor ? homePath(locals.actor) : '/sign-in');
};
