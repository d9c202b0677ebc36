import { randomUUID } from 'node:crypto';
import { building } from '$app/environment';
import {
	redirect,
	type Handle,
	type HandleServerError,
	type RequestEvent,
	type ServerInit
} from '@sveltejs/kit';
import { sequence } from '@sveltejs/kit/hooks';
import { authHandle, clearSessionCookie, pinAuthAddress } from '$lib/server/auth/auth';
import { sessionCookieName } from '$lib/server/auth/session-cookie';
import { hashToken } from '$lib/server/auth/tokens';
import { parseConfig } from '$lib/server/config';
import {
	buildContainer,
	container,
	installContainer,
	installedContainer,
	type Container
} from '$lib/server/container';
import { assertMigrated } from '$lib/server/db/pending-migrations';
import { isForeignWrite, securityHeaders } from '$lib/server/http/security-headers';

const MIGRATIONS = Object.keys(import.meta.glob('/migrations/*.ts')).map((path) =>
	path.slice(path.lastIndexOf('/') + 1)
);

const SWEEP_EVERY_MS = 24 * 3600_000;

/** Interrupted uploads that nobody went on with; a failed sweep is tried again the next day. */
async function clearInterrupted({ services, log }: Container): Promise<void> {
	try {
		const cleared = await services.receiving.sweep();
		if (cleared.sessions + cleared.files > 0) log.info(cleared, 'interrupted uploads cleared away');
	} catch (cause) {
		log.error({ err: cause }, 'interrupted uploads could not be cleared away');
	}
}

export const init: ServerInit = async () => {
	if (building || installedContainer()) return;
	const built = buildContainer(parseConfig(process.env), 'web');
	pinAuthAddress(built.config.origin);
	await assertMigrated(built.db, MIGRATIONS);
	installContainer(built);
	const sweeping = setInterval(() => void clearInterrupted(built), SWEEP_EVERY_MS);
	sweeping.unref();
	void clearInterrupted(built);
	process.once('sveltekit:shutdown', async () => {
		clearInterval(sweeping);
		await built.db.destroy();
		built.log.info('web stopped');
	});
	built.log.info({ origin: built.config.origin, mode: built.config.mode }, 'web started');
};

const NO_PAGE = 'There is no page at this address. Check the address, or go back to the start.';

/** A refusal from within a hook; a thrown error would skip the outer hooks, and with them headers and log. */
function refuse(event: RequestEvent, status: number, message: string): Response {
	const reference = event.locals.requestId;
	if (event.request.headers.get('accept')?.includes('text/html'))
		return new Response(`${message}\n\nReference: ${reference}\n`, {
			status,
			headers: { 'content-type': 'text/plain; charset=utf-8' }
		});
	return Response.json({ message, reference }, { status });
}

/** Request id, theme, security headers and one log line for every answer. */
const identify: Handle = async ({ event, resolve }) => {
	const { config, log } = container();
	Object.assign(event.locals, { requestId: randomUUID(), actor: null, clientName: null, sessionId: null });
	const theme = event.cookies.get('theme');
	event.locals.theme = theme === 'light' || theme === 'dark' ? theme : 'auto';
	const started_ms = performance.now();
	const answer = await resolve(event, {
		transformPageChunk: ({ html }) => html.replace('%theme%', event.locals.theme),
		preload: ({ type, path }) =>
			type === 'js' ||
			type === 'css' ||
			(type === 'font' && path.endsWith('.woff2') && path.includes('-latin-400'))
	});
	// Redirects made by others have headers that cannot be changed; a copy can.
	const response = new Response(answer.body, answer);
	for (const [name, value] of Object.entries(securityHeaders(config)))
		if (!response.headers.has(name)) response.headers.set(name, value);
	response.headers.set('x-request-id', event.locals.requestId);
	log.info(
		{
			requestId: event.locals.requestId,
			userId: event.locals.actor?.userId,
			method: event.request.method,
			// The pattern, never the address: addresses can carry one-time tokens.
			route: event.route.id,
			status: response.status,
			ms: Math.round(performance.now() - started_ms)
		},
		'request'
	);
	return response;
};

/** Auth.js is used from our own pages only; its pages and endpoints would go round our limits and our wording. */
const closeAuthPages: Handle = async ({ event, resolve }) => {
	const { pathname } = event.url;
	if (pathname === '/auth' || pathname.startsWith('/auth/')) return refuse(event, 404, NO_PAGE);
	return resolve(event);
};

/** From cookie to actor, once a request. A session that is gone takes its cookie along. */
const recogniseActor: Handle = async ({ event, resolve }) => {
	const { config, services } = container();
	const token = event.cookies.get(sessionCookieName(config));
	if (token && event.route.id !== null) {
		const sessionId = hashToken(token);
		const session = await event.locals.auth();
		const place = session ? await services.account.actorOfSession(sessionId) : null;
		if (place) {
			event.locals.actor = place.actor;
			event.locals.clientName = place.clientName;
			event.locals.sessionId = sessionId;
		} else clearSessionCookie(event);
	}
	if (event.locals.actor && isForeignWrite(event.request, [config.origin, event.url.origin]))
		return refuse(
			event,
			403,
			'This was sent from another site and has not been done. Open the page here and try again.'
		);
	return resolve(event);
};

/** Each half of the product to its own people. What a page or route then allows is decided by its guard. */
const separateHalves: Handle = async ({ event, resolve }) => {
	const { actor } = event.locals;
	const route = event.route.id ?? '';
	if (actor && route !== '') {
		const elsewhere =
			actor.role === 'client' && route.startsWith('/(app)')
				? '/portal/reports'
				: actor.role !== 'client' && route.startsWith('/(portal)')
					? '/desk'
					: null;
		if (elsewhere !== null && event.request.method !== 'GET')
			return refuse(
				event,
				403,
				`Your role (${actor.role}) does not allow this. Ask the owner of the practice.`
			);
		// Navigation within the app asks for data and wants SvelteKit's own kind of redirect.
		if (elsewhere !== null && event.isDataRequest) redirect(303, elsewhere);
		if (elsewhere !== null) return new Response(null, { status: 303, headers: { location: elsewhere } });
	}
	return resolve(event);
};

export const handle = sequence(identify, closeAuthPages, authHandle, recogniseActor, separateHalves);

export const handleError: HandleServerError = ({ error: cause, event, status, message }) => {
	const reference = event.locals.requestId;
	if (status === 404) return { message: NO_PAGE, reference };
	if (status < 500) return { message, reference };
	container().log.error({ err: cause, requestId: reference, route: event.route.id }, message);
	return {
		message: 'Something went wrong on our side. Try again; if it happens again, tell us the reference.',
		reference
	};
};
