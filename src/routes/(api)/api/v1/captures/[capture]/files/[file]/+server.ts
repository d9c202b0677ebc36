import { Readable } from 'node:stream';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { attachmentDisposition } from '$lib/server/http/attachment-disposition';
import type { RequestEvent } from './$types';

/** An original file, byte for byte as it was uploaded. */
export const GET = guard('capture.read', async (event: RequestEvent, actor) => {
	const file = await container().services.captures.originalFile(
		actor,
		event.params.capture,
		event.params.file
	);
	return new Response(Readable.toWeb(file.content) as ReadableStream<Uint8Array>, {
		headers: {
			'content-type': 'application/octet-stream',
			'content-length': String(file.size_bytes),
			'content-disposition': attachmentDisposition(file.name),
			'x-content-type-options': 'nosniff',
			'cache-control': 'private, no-store',
			etag: `"${file.sha256}"`
		}
	});
});
