import { env } from '$env/dynamic/private';
import Credentials from '@auth/core/providers/credentials';
import { AuthError, SvelteKitAuth, type SvelteKitAuthConfig } from '@auth/sveltekit';
import type { Handle, RequestEvent } from '@sveltejs/kit';
import { container } from '../container';
import { knexAdapter } from './knex-adapter';
import { isSecure, sessionCookieName } from './session-cookie';
import { newToken } from './tokens';

const DAY_S = 86_400;
const EXTEND_AFTER_S = 3600;

/**
 * Auth.js would else build its addresses from the Host and X-Forwarded-Host headers, which anybody can set.
 * Called before the first request.
 */
export function pinAuthAddress(origin: string): void {
	env['AUTH_URL'] = origin;
}

function authConfig(event: Pick<RequestEvent, 'request'>): SvelteKitAuthConfig {
	const { config, db, clock, log, services } = container();
	const adapter = knexAdapter({ db, clock, userAgent: event.request.headers.get('user-agent') ?? '' });
	const maxAge = config.session_days * DAY_S;
	return {
		adapter,
		secret: config.authSecret,
		trustHost: true,
		useSecureCookies: isSecure(config),
		cookies: {
			sessionToken: {
				name: sessionCookieName(config),
				options: { httpOnly: true, sameSite: 'lax', path: '/', secure: isSecure(config) }
			}
		},
		// The strategy stays unset: with an adapter it is "database", and naming it makes Auth.js refuse Credentials.
		session: { maxAge, updateAge: EXTEND_AFTER_S },
		jwt: {
			// Only a sign-in by Credentials comes here: it gets a row in `sessions` instead of a signed token.
			async encode({ token }) {
				const sessionToken = newToken();
				const userId = token?.sub;
				if (!userId) throw new Error('a session needs a person');
				const expires = new Date(clock().getTime() + maxAge * 1000);
				await adapter.createSession?.({ sessionToken, userId, expires });
				return sessionToken;
			},
			decode: async () => null
		},
		providers: [
			Credentials({
				id: 'password',
				credentials: { email: {}, password: {} },
				authorize: ({ email, password }) => services.signIn.withPassword(String(email), String(password))
			}),
			Credentials({
				id: 'link',
				credentials: { token: {} },
				authorize: ({ token }) => services.signIn.withLink(String(token))
			})
		],
		callbacks: {
			// Built anew: the default hands out the session's token.
			session: ({ session, user }) => ({
				user: { id: user.id, name: user.name ?? null, email: user.email },
				expires: session.expires
			})
		},
		pages: { signIn: '/sign-in', error: '/sign-in' },
		logger: {
			warn: () => undefined,
			// A wrong password is no error of ours.
			error: (cause) => {
				if (!(cause instanceof AuthError && cause.type === 'CredentialsSignin'))
					log.error({ err: cause }, 'sign-in');
			}
		}
	};
}

const auth = SvelteKitAuth(async (event) => authConfig(event));

/** Gives `locals.auth()`. Auth.js' own pages and endpoints under /auth/ are closed in the hooks. */
export const authHandle: Handle = auth.handle;

/**
 * The event as Auth.js is to see it: our own address, the person's cookies and browser, the given fields. Nothing
 * of what a client may write into forwarding headers gets through.
 */
function asAuthEvent(event: RequestEvent, fields: Record<string, string>): RequestEvent {
	const { config } = container();
	const headers = new Headers({
		'content-type': 'application/x-www-form-urlencoded',
		referer: config.origin
	});
	for (const name of ['cookie', 'user-agent']) {
		const value = event.request.headers.get(name);
		if (value !== null) headers.set(name, value);
	}
	const url = new URL('/sign-in', config.origin);
	const request = new Request(url, {
		method: 'POST',
		headers,
		// An empty `redirect` makes Auth.js set the cookie and come back, instead of throwing a redirect.
		body: new URLSearchParams({ ...fields, redirect: '', redirectTo: '/' })
	});
	return new Proxy(event, {
		get: (target, key) => (key === 'request' ? request : key === 'url' ? url : Reflect.get(target, key))
	});
}

export type SignInWith =
	{ provider: 'password'; email: string; password: string } | { provider: 'link'; token: string };

/** Opens a session and sets its cookie; false when the password or the link is of no use. */
export async function openSession(
	event: RequestEvent,
	{ provider, ...fields }: SignInWith
): Promise<boolean> {
	try {
		await auth.signIn(asAuthEvent(event, { providerId: provider, ...fields }));
	} catch (cause) {
		if (cause instanceof AuthError && cause.type === 'CredentialsSignin') return false;
		throw cause;
	}
	// Where to go next is ours to say; Auth.js' own note of it is not used.
	event.cookies.delete(`${isSecure(container().config) ? '__Secure-' : ''}authjs.callback-url`, {
		path: '/'
	});
	// Who signs in anew in the same browser leaves no second session behind.
	if (event.locals.sessionId !== null) await container().services.account.endSession(event.locals.sessionId);
	return true;
}

/** Ends the session of this browser and clears its cookie. */
export async function closeSession(event: RequestEvent): Promise<void> {
	await auth.signOut(asAuthEvent(event, {}));
}

export function clearSessionCookie(event: RequestEvent): void {
	event.cookies.delete(sessionCookieName(container().config), { path: '/' });
}
