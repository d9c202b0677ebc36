import { json } from '@sveltejs/kit';
import { z } from 'zod';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

const intake = z.object({ uploadIds: z.array(z.string()).min(1).max(500) });

/** Sorts uploaded files into sets and queues the reading of each. */
export const POST = guard('capture.write', async (event: RequestEvent, actor) => {
	const body = intake.safeParse(await event.request.json().catch(() => null));
	if (!body.success)
		throw new AppError('invalid', 'Send {"uploadIds": […]} with the ids of at least one uploaded file.');
	const outcome = await container().services.uploads.intake(actor, event.params.survey, body.data.uploadIds);
	return json(outcome, { status: 202 });
});
