import { z } from 'zod';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

const MOST_CHANNELS = 512;
const asked = z.object({
	level: z.coerce.number().int().min(0).max(16),
	tile: z.coerce.number().int().min(0),
	/** Comma-separated channel indexes; all channels when absent. */
	channels: z
		.string()
		.regex(/^\d+(,\d+)*$/)
		.transform((text) => text.split(',').map(Number))
		.pipe(z.array(z.number()).max(MOST_CHANNELS))
		.optional()
});

/**
 * `GET …/tiles/LEVEL/TILE?channels=0,2&of=HASH`: 4096 entries of one level, binary as recording/pyramid/tile-codec.ts
 * describes. `of`, the hash that the description gave, is not looked at: it makes the address one of this content, which
 * never changes under it.
 */
export const GET = guard('capture.read', async (event: RequestEvent, actor) => {
	const parsed = asked.safeParse({
		...event.params,
		channels: event.url.searchParams.get('channels') ?? undefined
	});
	if (!parsed.success)
		throw new AppError('invalid', 'Ask for a level and a tile by number, and channels as "0,1,2".');
	const { level, tile, channels = [] } = parsed.data;
	const { name, bytes } = await container().services.viewer.tile(actor, event.params.capture, {
		level,
		tile,
		channelIndexes: channels,
		known: event.request.headers.get('if-none-match')
	});
	const headers = { etag: name, 'cache-control': 'private, max-age=31536000, immutable' };
	if (bytes === null) return new Response(null, { status: 304, headers });
	return new Response(bytes, { headers: { ...headers, 'content-type': 'application/octet-stream' } });
});
