import { redirect } from '@sveltejs/kit';
import { message, setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { openSession } from '$lib/server/auth/auth';
import { takeAllowance, tooManyAttempts } from '$lib/server/auth/rate-limit';
import { container } from '$lib/server/container';
import { invitationForm, joinForm } from '../../schema';
import type { Actions, PageServerLoad } from './$types';

const OF_NO_USE = 'This invitation was used already, withdrawn, or is too old. Ask for a new one.';

/** Opening the page touches nothing; only sending the form accepts. */
export const load: PageServerLoad = async ({ params }) => {
	const invitation = await container().services.invitations.open(params.token);
	return {
		invitation,
		form: await superValidate({ name: invitation?.name ?? '' }, zod4(invitationForm), { errors: false })
	};
};

export const actions: Actions = {
	default: async (event) => {
		const { invitations } = container().services;
		const invitation = await invitations.open(event.params.token);
		// Somebody known gives the password they have, whatever its length; somebody new chooses one.
		const schema = invitation?.hasAccount ? joinForm : invitationForm;
		const form = await superValidate(event, zod4(schema));
		const { name, password } = form.data;
		form.data.password = '';
		if (!form.valid) return message(form, undefined, { status: 400 });
		const allowance = await takeAllowance('token', event.getClientAddress(), null);
		if (allowance.wait_s !== null)
			return message(form, tooManyAttempts(event, allowance.wait_s), { status: 429 });
		const accepted = await invitations.accept(event.params.token, { name, password });
		if (!accepted.ok)
			return accepted.problem.code === 'wrong-password'
				? setError(form, 'password', 'This is not the password of your account.')
				: message(form, OF_NO_USE, { status: 400 });
		await allowance.giveBack();
		await openSession(event, { provider: 'password', email: accepted.value.email, password });
		redirect(303, '/');
	}
};
