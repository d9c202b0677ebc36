import { json } from '@sveltejs/kit';
import { z } from 'zod';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

const sha256 = z.string().regex(/^[0-9a-f]{64}$/);
const asked = z.object({ sha256, size_bytes: z.number().int().nonnegative() });
const taken = z.object({ sha256, name: z.string() });
const WANTED = 'with the SHA-256 of the file as 64 hexadecimal digits in lower case.';

/** What is known of a file by its content, before it is sent. */
export const POST = guard('capture.write', async (event: RequestEvent, actor) => {
	const body = asked.safeParse(await event.request.json().catch(() => null));
	if (!body.success) throw new AppError('invalid', `Send {"sha256": …, "size_bytes": …} ${WANTED}`);
	return json(await container().services.receiving.lookUp(actor, event.params.survey, body.data));
});

/** Takes a file that the practice holds already into this survey. */
export const PUT = guard('capture.write', async (event: RequestEvent, actor) => {
	const body = taken.safeParse(await event.request.json().catch(() => null));
	if (!body.success) throw new AppError('invalid', `Send {"sha256": …, "name": …} ${WANTED}`);
	return json(await container().services.receiving.takeHeld(actor, event.params.survey, body.data), {
		status: 201
	});
});
