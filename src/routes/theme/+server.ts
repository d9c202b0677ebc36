import { redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { ownPath } from '$lib/server/auth/own-path';
import type { RequestHandler } from './$types';

const YEAR_S = 365 * 24 * 3600;
const themeChoice = z.enum(['auto', 'light', 'dark']).catch('auto');

/** Sets the colours for a browser without script; with script the switch writes the same cookie itself. */
export const POST: RequestHandler = async ({ request, cookies }) => {
	// Without a form, or with something else in its place: back to the system's colours.
	const form = await request.formData().catch(() => new FormData());
	// Read by script too, so not httpOnly: it is a wish for colours and nothing else.
	cookies.set('theme', themeChoice.parse(form.get('theme')), {
		path: '/',
		maxAge: YEAR_S,
		httpOnly: false,
		secure: false,
		sameSite: 'lax'
	});
	const back = form.get('next');
	redirect(303, ownPath(typeof back === 'string' ? back : null, '/'));
};
