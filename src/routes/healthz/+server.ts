import { container } from '$lib/server/container';
import type { RequestHandler } from './$types';

/** For whatever watches the deployment: up means that the database answers. */
export const GET: RequestHandler = async () => {
	const { db, log } = container();
	try {
		await db.raw('select 1');
		return Response.json({ status: 'ok' }, { headers: { 'cache-control': 'no-store' } });
	} catch (cause) {
		log.error({ err: cause }, 'database does not answer');
		return Response.json({ status: 'database does not answer' }, { status: 503 });
	}
};
