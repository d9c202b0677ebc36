import type { RequestEvent } from '@sveltejs/kit';
import { message, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { letterheadSchema } from '$lib/register/letterhead';
import { timeZoneNames } from '$lib/register/time-zones';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('practice.manage', async (_event: PageServerLoadEvent, actor) => ({
	form: await superValidate(await container().services.practice.letterhead(actor), zod4(letterheadSchema)),
	timeZones: timeZoneNames()
}));

export const actions = {
	default: guard('practice.manage', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(letterheadSchema));
		if (!form.valid) return message(form, undefined, { status: 400 });
		await container().services.practice.saveLetterhead(actor, form.data);
		return message(form, 'Saved. Reports issued from now on carry it; issued ones stay as they are.');
	})
};
