import { json } from '@sveltejs/kit';
import { z } from 'zod';
import { layoutUnderWaySchema } from '$lib/recording/readers/delimited-text/table-layout-told';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { RequestEvent } from './$types';

const asked = z.object({ layout: layoutUnderWaySchema, columnsAnew: z.boolean().default(false) });

/** What a way of reading would make of a table; nothing is stored. */
export const POST = guard('capture.write', async (event: RequestEvent, actor) => {
	const body = asked.safeParse(await event.request.json().catch(() => null));
	if (!body.success)
		throw new AppError(
			'invalid',
			`Send {"layout": …}: ${body.error.issues[0]?.message ?? 'it is not complete'} (${body.error.issues[0]?.path.join('.') ?? 'layout'}).`
		);
	const { layout, columnsAnew } = body.data;
	return json(await container().services.tables.preview(actor, event.params.capture, layout, columnsAnew));
});
