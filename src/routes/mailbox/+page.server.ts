import { container } from '$lib/server/container';
import { asHttpError } from '$lib/server/http/guard';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	try {
		return { mails: await container().services.mailbox.list() };
	} catch (cause) {
		asHttpError(event, cause);
	}
};
