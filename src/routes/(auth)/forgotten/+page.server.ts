import { message, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { takeAllowance, tooManyAttempts } from '$lib/server/auth/rate-limit';
import { container } from '$lib/server/container';
import { addressForm } from '../schema';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async () => ({ form: await superValidate(zod4(addressForm)) });

export const actions: Actions = {
	default: async (event) => {
		const form = await superValidate(event, zod4(addressForm));
		if (!form.valid) return message(form, undefined, { status: 400 });
		const { email } = form.data;
		const allowance = await takeAllowance('mail', event.getClientAddress(), email);
		if (allowance.wait_s !== null)
			return message(form, { problem: tooManyAttempts(event, allowance.wait_s) }, { status: 429 });
		await container().services.signIn.requestReset(email);
		return message(form, {
			done: `If ${email} belongs to somebody here, a link to set a new password is on its way.`
		});
	}
};
