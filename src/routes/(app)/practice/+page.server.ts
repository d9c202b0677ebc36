import { redirect } from '@sveltejs/kit';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

export const load = guard('practice.manage', (_event: PageServerLoadEvent): never =>
	redirect(303, '/practice/people')
);
