import { redirect } from '@sveltejs/kit';
import { message, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { homePath } from '$lib/access/home-path';
import { openSession } from '$lib/server/auth/auth';
import { ownPath } from '$lib/server/auth/own-path';
import { takeAllowance, tooManyAttempts } from '$lib/server/auth/rate-limit';
import { container } from '$lib/server/container';
import { signInForm } from '../schema';
import type { Actions, PageServerLoad } from './$types';

// The same sentence for an unknown address, a wrong password and a person without access.
const NO_MATCH = 'Address and password do not match. Check both, or ask for a sign-in link.';

export const load: PageServerLoad = async ({ locals, url }) => {
	const next = ownPath(url.searchParams.get('next'), '/');
	if (locals.actor) redirect(303, next === '/' ? homePath(locals.actor) : next);
	return {
		form: await superValidate(zod4(signInForm)),
		next,
		demoPeople: await container().services.signIn.demoPeople()
	};
};

export const actions: Actions = {
	default: async (event) => {
		const form = await superValidate(event, zod4(signInForm));
		const { email, password } = form.data;
		// The password does not travel back to the page.
		form.data.password = '';
		if (!form.valid) return message(form, undefined, { status: 400 });
		const allowance = await takeAllowance('signIn', event.getClientAddress(), email);
		if (allowance.wait_s !== null)
			return message(form, tooManyAttempts(event, allowance.wait_s), { status: 429 });
		if (!(await openSession(event, { provider: 'password', email, password })))
			return message(form, NO_MATCH, { status: 400 });
		await allowance.giveBack();
		redirect(303, ownPath(event.url.searchParams.get('next'), '/'));
	}
};
