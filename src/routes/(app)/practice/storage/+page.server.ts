import type { RequestEvent } from '@sveltejs/kit';
import { message, setError, superValidate } from 'sveltekit-superforms';
import { zod4 } from 'sveltekit-superforms/adapters';
import { quotaOf, storageQuotaSchema } from '$lib/register/storage-quota';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('practice.manage', async (_event: PageServerLoadEvent, actor) => {
	const storage = await container().services.practice.storage(actor);
	const own_bytes = storage.use.ownQuota_bytes;
	return {
		...storage,
		form: await superValidate(
			{ limit_GB: own_bytes === null ? '' : String(own_bytes / 1e9) },
			zod4(storageQuotaSchema)
		)
	};
});

export const actions = {
	default: guard('practice.manage', async (event: RequestEvent, actor) => {
		const form = await superValidate(event, zod4(storageQuotaSchema));
		if (!form.valid) return message(form, undefined, { status: 400 });
		try {
			await container().services.practice.setStorageQuota(actor, quotaOf(form.data.limit_GB));
		} catch (cause) {
			if (cause instanceof AppError && cause.code === 'invalid')
				return setError(form, 'limit_GB', cause.message);
			throw cause;
		}
		return message(form, 'Saved. Files that would not fit are refused before they are sent.');
	})
};
