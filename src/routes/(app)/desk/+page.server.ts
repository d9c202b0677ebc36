import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('register.read', async (_event: PageServerLoadEvent, actor) => ({
	desk: await container().services.desk.today(actor),
	firstName: actor.name.split(' ')[0] ?? actor.name
}));
