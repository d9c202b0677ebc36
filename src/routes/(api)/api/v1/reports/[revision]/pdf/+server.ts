import { Readable } from 'node:stream';
import { container } from '$lib/server/container';
import { attachmentDisposition } from '$lib/server/http/attachment-disposition';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

/** The PDF of a revision; `?download` asks the browser to save it. */
export const GET = guard(['report.read', 'portal.read'], async (event: RequestEvent, actor) => {
	const { reports } = container().services;
	const file = await reports.pdf(actor, event.params.revision);
	const etag = `"${file.sha256}"`;
	const disposition = attachmentDisposition(file.fileName);
	const headers = {
		etag,
		// What was issued never changes, but who may see it can: ask again each time.
		'cache-control': 'private, no-cache',
		'x-content-type-options': 'nosniff'
	};
	if (event.request.headers.get('if-none-match') === etag)
		return new Response(null, { status: 304, headers });
	return new Response(Readable.toWeb(reports.openPdf(file)) as ReadableStream<Uint8Array>, {
		headers: {
			...headers,
			'content-type': 'application/pdf',
			'content-length': String(file.size_bytes),
			'content-disposition': event.url.searchParams.has('download')
				? disposition
				: disposition.replace(/^attachment/, 'inline')
		}
	});
});
