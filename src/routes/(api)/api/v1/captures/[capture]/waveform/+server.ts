import { json } from '@sveltejs/kit';
import { z } from 'zod';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

const MOST_POINTS = 20_000;
const query = z.object({
	from_s: z.coerce.number().min(0),
	to_s: z.coerce.number().positive(),
	points: z.coerce.number().int().min(2).max(MOST_POINTS),
	/** Comma-separated channel indexes; all mapped channels when absent. */
	channels: z
		.string()
		.regex(/^\d+(,\d+)*$/)
		.transform((text) => text.split(',').map(Number))
		.optional()
});

export const GET = guard('capture.read', async (event: RequestEvent, actor) => {
	const asked = query.safeParse(Object.fromEntries(event.url.searchParams));
	if (!asked.success || asked.data.to_s <= asked.data.from_s)
		throw new AppError('invalid', `Ask with from_s < to_s in seconds and points from 2 to ${MOST_POINTS}.`);
	const slice = await container().services.readings.waveform(actor, event.params.capture, asked.data);
	return json(slice, { headers: { 'cache-control': 'private, max-age=60' } });
});
