import { redirect } from '@sveltejs/kit';
import { message, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { takeAllowance, tooManyAttempts } from '$lib/server/auth/rate-limit';
import { container } from '$lib/server/container';
import { resetForm } from '../../schema';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ params }) => ({
	form: await superValidate(zod4(resetForm)),
	open: await container().services.signIn.resetIsOpen(params.token)
});

export const actions: Actions = {
	default: async (event) => {
		const form = await superValidate(event, zod4(resetForm));
		const { password } = form.data;
		form.data.password = '';
		if (!form.valid) return message(form, undefined, { status: 400 });
		const allowance = await takeAllowance('token', event.getClientAddress(), null);
		if (allowance.wait_s !== null)
			return message(form, tooManyAttempts(event, allowance.wait_s), { status: 429 });
		const person = await container().services.signIn.resetPassword(event.params.token, password);
		if (!person)
			return message(form, 'This link was used already or is too old. Ask for a new one.', { status: 400 });
		await allowance.giveBack();
		redirect(303, '/sign-in?done=password-set');
	}
};
