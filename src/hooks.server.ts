import { randomUUID } from 'node:crypto';
import { building } from '$app/environment';
import type { Handle, HandleServerError, ServerInit } from '@sveltejs/kit';
import { sequence } from '@sveltejs/kit/hooks';
import { buildContainer, container, installContainer, installedContainer } from '$lib/server/container';
import { parseConfig } from '$lib/server/config';

export const init: ServerInit = async () => {
	if (building || installedContainer()) return;
	const built = buildContainer(parseConfig(process.env), 'web');
	installContainer(built);
	process.once('sveltekit:shutdown', async () => {
		await built.db.destroy();
		built.log.info('web stopped');
	});
	built.log.info({ origin: built.config.origin, mode: built.config.mode }, 'web started');
};

const identify: Handle = async ({ event, resolve }) => {
	event.locals.requestId = randomUUID();
	event.locals.actor = null;
	const theme = event.cookies.get('theme');
	event.locals.theme = theme === 'light' || theme === 'dark' ? theme : 'auto';
	const started_ms = performance.now();
	const response = await resolve(event, {
		transformPageChunk: ({ html }) => html.replace('%theme%', event.locals.theme),
		preload: ({ type, path }) => type === 'js' || type === 'css' || (type === 'font' && path.endsWith('.woff2') && path.includes('-latin-400'))
	});
	container().log.info(
		{
			requestId: event.locals.requestId,
			method: event.request.method,
			route: event.route.id,
			status: response.status,
			ms: Math.round(performance.now() - started_ms)
		},
		'request'
	);
	return response;
};

export const handle = sequence(identify);

export const handleError: HandleServerError = ({ error, event, status, message }) => {
	const reference = event.locals.requestId;
	if (status === 404)
		return { message: 'There is no page at this address. Check the address, or go back to the start.', reference };
	container().log.error({ err: error, requestId: reference, route: event.route.id }, message);
	return {
		message: 'Something went wrong on our side. Try again; if it happens again, tell us the reference.',
		reference
	};
};
