import { redirect } from '@sveltejs/kit';
import { guard } from '$lib/server/http/guard';

export const load = guard('portal.read', () => redirect(307, '/portal/reports'));
