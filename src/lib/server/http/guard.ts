import { error, redirect, type RequestEvent } from '@sveltejs/kit';
import type { Action, Actor } from '../../access/access';
import { AppError } from '../app-error';
import { requireAnyPermission } from '../auth/require-permission';

/** Where to come back after signing in: own paths only. */
export function signInPath(url: URL): string {
	return `/sign-in?next=${encodeURIComponent(url.pathname + url.search)}`;
}

function requireActor(event: RequestEvent): Actor {
	if (event.locals.actor) return event.locals.actor;
	if (event.route.id?.startsWith('/(api)'))
		error(401, { message: 'Sign in, or send a valid token.', reference: event.locals.requestId });
	redirect(303, signInPath(event.url));
}

/** Turns an expected failure into the right status; anything else goes on to handleError. */
export function asHttpError(event: RequestEvent, cause: unknown): never {
	if (cause instanceof AppError)
		error(cause.status, { message: cause.message, reference: event.locals.requestId });
	throw cause;
}

/**
 * The one gate: every load, form action, API handler and file route of the signed-in product is made with it
 * (tests/architecture proves that none is not). It asks for a signed-in actor and the permission, and turns the
 * use case's AppError into an HTTP status.
 *
 * A list of permissions means any of them: a file that both consultants and the client's people may fetch.
 *
 * `export const load = guard('register.read', async (event: PageServerLoadEvent, actor) => …)`
 */
export function guard<E extends RequestEvent, R>(
	permission: Action | readonly Action[],
	handle: (event: E, actor: Actor) => R | Promise<R>
): (event: E) => Promise<R> {
	return async (event) => {
		const actor = requireActor(event);
		try {
			requireAnyPermission(actor, typeof permission === 'string' ? [permission] : permission);
			return await handle(event, actor);
		} catch (cause) {
			asHttpError(event, cause);
		}
	};
}
