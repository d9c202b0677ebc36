import { json } from '@sveltejs/kit';
import { z } from 'zod';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

const query = z.object({ at_s: z.coerce.number().min(0) });

/** The 10/12-cycle window over an instant with its subgroups; null where no window covers it. */
export const GET = guard('capture.read', async (event: RequestEvent, actor) => {
	const asked = query.safeParse({ at_s: event.url.searchParams.get('at_s') || undefined });
	if (!asked.success) throw new AppError('invalid', 'Ask with at_s, seconds after the first sample.');
	return json(await container().services.viewer.window(actor, event.params.capture, asked.data.at_s), {
		headers: { 'cache-control': 'private, no-cache' }
	});
});
