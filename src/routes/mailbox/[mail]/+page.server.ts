import { container } from '$lib/server/container';
import { asHttpError } from '$lib/server/http/guard';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	try {
		const mail = await container().services.mailbox.byId(event.params.mail);
		return { mail, links: mail.text.match(/https?:\/\/\S+/g) ?? [] };
	} catch (cause) {
		asHttpError(event, cause);
	}
};
