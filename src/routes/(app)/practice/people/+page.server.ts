import { fail, redirect, type RequestEvent } from '@sveltejs/kit';
import { message, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { INVITATION_VALID_DAYS } from '$lib/server/services/people.service';
import { inviteForm, roleForm } from './schema';
import type { PageServerLoadEvent } from './$types';

export const load = guard('practice.manage', async (event: PageServerLoadEvent, actor) => {
	const people = await container().services.people.list(actor);
	// A client's page leads here with its organisation chosen already.
	const clientId = event.url.searchParams.get('client') ?? '';
	const known = people.clients.some((client) => client.id === clientId);
	const start = known ? { role: 'client' as const, clientId } : undefined;
	return { ...people, form: await superValidate(start, zod4(inviteForm), { errors: false }) };
});

/** A refusal that the person can mend is shown on the page; anything else goes on to the guard. */
async function orProblem(work: Promise<void>) {
	try {
		await work;
	} catch (cause) {
		if (cause instanceof AppError && (cause.code === 'conflict' || cause.code === 'invalid'))
			return fail(cause.status, { problem: cause.message });
		throw cause;
	}
	redirect(303, '/practice/people');
}

const field = async (event: RequestEvent, name: string) => String((await event.request.formData()).get(name));

export const actions = {
	invite: guard('practice.manage', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(inviteForm));
		if (!form.valid) return message(form, undefined, { status: 400 });
		const { email, name, role, clientId } = form.data;
		try {
			await container().services.people.invite(actor, {
				email,
				name,
				role,
				clientId: role === 'client' ? clientId : null
			});
		} catch (cause) {
			if (cause instanceof AppError && cause.code === 'conflict')
				return message(form, { problem: cause.message }, { status: 409 });
			throw cause;
		}
		return message(form, {
			done: `The invitation to ${email} is on its way. It is valid for ${INVITATION_VALID_DAYS} days.`
		});
	}),

	resend: guard('practice.manage', async (event: RequestEvent, actor) =>
		orProblem(container().services.people.resendInvitation(actor, await field(event, 'invitation')))
	),

	withdraw: guard('practice.manage', async (event: RequestEvent, actor) =>
		orProblem(container().services.people.revokeInvitation(actor, await field(event, 'invitation')))
	),

	role: guard('practice.manage', async (event: RequestEvent, actor) => {
		const given = roleForm.safeParse(Object.fromEntries(await event.request.formData()));
		if (!given.success) return fail(400, { problem: 'Choose one of the roles in the list.' });
		return orProblem(container().services.people.changeRole(actor, given.data.membership, given.data.role));
	}),

	remove: guard('practice.manage', async (event: RequestEvent, actor) =>
		orProblem(container().services.people.revokeMembership(actor, await field(event, 'membership')))
	)
};
