import { Readable } from 'node:stream';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { attachmentDisposition } from '$lib/server/http/attachment-disposition';
import type { RequestEvent } from './$types';

/** The file of a calibration certificate, as it was given; a download, never shown within the product's origin. */
export const GET = guard('register.read', async (event: RequestEvent, actor) => {
	const file = await container().services.calibrations.file(actor, event.params.certificate);
	return new Response(Readable.toWeb(file.content) as ReadableStream<Uint8Array>, {
		headers: {
			'content-type': file.mediaType,
			'content-length': String(file.size_bytes),
			'content-disposition': attachmentDisposition(file.name),
			'content-security-policy': "default-src 'none'; sandbox",
			'x-content-type-options': 'nosniff',
			'cache-control': 'private, no-store',
			etag: `"${file.sha256}"`
		}
	});
});
