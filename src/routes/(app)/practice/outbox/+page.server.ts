import { redirect, type RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import { parseListQuery } from '$lib/server/read-models/list-query';
import { MAIL_SORTS } from '$lib/server/read-models/mail-list';
import type { PageServerLoadEvent } from './$types';

const statusFilter = z.enum(['queued', 'sent', 'failed']).nullable().catch(null);

export const load = guard('practice.manage', async ({ url }: PageServerLoadEvent, actor) => {
	const { practice } = container().services;
	const status = statusFilter.parse(url.searchParams.get('status'));
	const query = parseListQuery(url.searchParams, MAIL_SORTS, '-created');
	return { mails: await practice.outbox(actor, { ...query, status }), status };
});

export const actions = {
	retry: guard('practice.manage', async (event: RequestEvent, actor) => {
		const mail = String((await event.request.formData()).get('mail'));
		await container().services.practice.retryMail(actor, mail);
		redirect(303, '/practice/outbox');
	})
};
