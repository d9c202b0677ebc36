import type { Config } from '../config';

const YEAR_S = 365 * 24 * 3600;

/** Headers of every answer that the application makes; the content security policy is SvelteKit's (svelte.config.js). */
export function securityHeaders(config: Pick<Config, 'origin'>): Record<string, string> {
	const headers: Record<string, string> = {
		'x-content-type-options': 'nosniff',
		'referrer-policy': 'same-origin',
		'permissions-policy': 'camera=(), microphone=(), geolocation=(), payment=(), usb=()',
		'cross-origin-opener-policy': 'same-origin',
		'cross-origin-resource-policy': 'same-origin'
	};
	if (config.origin.startsWith('https://'))
		headers['strict-transport-security'] = `max-age=${YEAR_S}; includeSubDomains`;
	return headers;
}

const WRITES = new Set(['POST', 'PUT', 'PATCH', 'DELETE']);

/**
 * True for a write that another site may have sent with the person's cookie. SvelteKit itself refuses forms from
 * elsewhere; this covers what is no form: uploads and JSON.
 */
export function isForeignWrite(request: Request, ownOrigins: readonly string[]): boolean {
	if (!WRITES.has(request.method)) return false;
	const origin = request.headers.get('origin');
	return origin === null || !ownOrigins.includes(origin);
}
