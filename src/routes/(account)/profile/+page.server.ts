import { redirect, type RequestEvent } from '@sveltejs/kit';
import { message, setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { AppError } from '$lib/server/app-error';
import { clearSessionCookie } from '$lib/server/auth/auth';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { nameForm, passwordForm } from '../../(auth)/schema';
import type { PageServerLoadEvent } from './$types';

export const load = guard('account.manage', async ({ locals }: PageServerLoadEvent, actor) => {
	const { account } = container().services;
	const profile = await account.profile(actor);
	return {
		profile,
		devices: await account.devices(actor, locals.sessionId),
		places: (await account.places(actor)).length,
		nameForm: await superValidate({ name: profile.name }, zod4(nameForm), { id: 'name' }),
		passwordForm: await superValidate(zod4(passwordForm), { id: 'password' })
	};
});

export const actions = {
	rename: guard('account.manage', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(nameForm), { id: 'name' });
		if (!form.valid) return message(form, undefined, { status: 400 });
		await container().services.account.rename(actor, form.data.name);
		return message(form, 'Your name is changed.');
	}),

	password: guard('account.manage', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(passwordForm), { id: 'password' });
		const { current, wanted } = form.data;
		Object.assign(form.data, { current: '', wanted: '' });
		if (!form.valid) return message(form, undefined, { status: 400 });
		try {
			await container().services.account.changePassword(actor, event.locals.sessionId ?? '', current, wanted);
		} catch (cause) {
			if (cause instanceof AppError && cause.code === 'invalid')
				return setError(form, 'current', cause.message);
			throw cause;
		}
		return message(form, 'Your password is changed. Your other devices are signed out.');
	}),

	signOutDevice: guard('account.manage', async (event: RequestEvent, actor) => {
		const device = String((await event.request.formData()).get('device'));
		await container().services.account.signOutDevice(actor, device);
		if (device === event.locals.sessionId) {
			clearSessionCookie(event);
			redirect(303, '/sign-in?done=signed-out');
		}
		redirect(303, '/profile');
	}),

	signOutEverywhere: guard('account.manage', async (event: RequestEvent, actor) => {
		await container().services.account.signOutEverywhere(actor);
		clearSessionCookie(event);
		redirect(303, '/sign-in?done=signed-out-everywhere');
	})
};
