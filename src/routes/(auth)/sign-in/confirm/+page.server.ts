import { redirect } from '@sveltejs/kit';
import { message, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { openSession } from '$lib/server/auth/auth';
import { ownPath } from '$lib/server/auth/own-path';
import { takeAllowance, tooManyAttempts } from '$lib/server/auth/rate-limit';
import { tokenForm } from '../../schema';
import type { Actions, PageServerLoad } from './$types';

/** Shows a button and touches nothing: programs that open every link in a mail must not use this one up. */
export const load: PageServerLoad = async ({ url }) => ({
	form: await superValidate({ token: url.searchParams.get('token') ?? '' }, zod4(tokenForm), {
		errors: false
	}),
	next: ownPath(url.searchParams.get('next'), '/')
});

const OF_NO_USE = 'This link was used already or is too old. Ask for a new one.';

export const actions: Actions = {
	default: async (event) => {
		const form = await superValidate(event, zod4(tokenForm));
		if (!form.valid) return message(form, OF_NO_USE, { status: 400 });
		const allowance = await takeAllowance('token', event.getClientAddress(), null);
		if (allowance.wait_s !== null)
			return message(form, tooManyAttempts(event, allowance.wait_s), { status: 429 });
		if (!(await openSession(event, { provider: 'link', token: form.data.token })))
			return message(form, OF_NO_USE, { status: 400 });
		await allowance.giveBack();
		redirect(303, ownPath(event.url.searchParams.get('next'), '/'));
	}
};
