import { message, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { ownPath } from '$lib/server/auth/own-path';
import { takeAllowance, tooManyAttempts } from '$lib/server/auth/rate-limit';
import { container } from '$lib/server/container';
import { SIGN_IN_LINK_VALID_MIN } from '$lib/server/services/sign-in.service';
import { addressForm } from '../../schema';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ url }) => ({
	form: await superValidate(zod4(addressForm)),
	next: ownPath(url.searchParams.get('next'), '/')
});

export const actions: Actions = {
	default: async (event) => {
		const form = await superValidate(event, zod4(addressForm));
		if (!form.valid) return message(form, undefined, { status: 400 });
		const { email } = form.data;
		const allowance = await takeAllowance('mail', event.getClientAddress(), email);
		if (allowance.wait_s !== null)
			return message(form, { problem: tooManyAttempts(event, allowance.wait_s) }, { status: 429 });
		await container().services.signIn.requestLink(email, ownPath(event.url.searchParams.get('next'), '/'));
		return message(form, {
			done: `If ${email} belongs to somebody here, a link is on its way. It works once and for ${SIGN_IN_LINK_VALID_MIN} minutes.`
		});
	}
};
