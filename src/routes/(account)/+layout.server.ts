import { guard } from '$lib/server/http/guard';
import type { LayoutServerLoadEvent } from './$types';

export const load = guard('account.manage', ({ locals }: LayoutServerLoadEvent, actor) => ({
	actor,
	organisation: locals.clientName ?? actor.practiceName
}));
