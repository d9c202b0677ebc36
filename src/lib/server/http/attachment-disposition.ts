/**
 * Content-Disposition of a download (RFC 6266): a plain name that every client understands, and the true one in
 * the extended notation of RFC 8187. Quotes, backslashes and line breaks never reach the header.
 */
export function attachmentDisposition(name: string): string {
	const plain =
		name
			.normalize('NFKD')
			.replace(/[^\x20-\x7e]/g, '')
			.replace(/["\\%;/]/g, '_')
			.trim() || 'file';
	const extended = encodeURIComponent(name).replace(
		/['()*!]/g,
		(sign) => `%${sign.charCodeAt(0).toString(16).toUpperCase()}`
	);
	return `attachment; filename="${plain}"; filename*=UTF-8''${extended}`;
}
