import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';
import { draftSchema } from './schema';

export const load = guard('report.read', async (event: PageServerLoadEvent, actor) => {
	event.depends('sinewright:survey');
	return { page: await container().services.reports.page(actor, event.params.survey) };
});

const here = (event: RequestEvent) => `/surveys/${event.params.survey}/report`;
const text = (form: FormData, name: string) => String(form.get(name) ?? '');

/** Runs a step of the report's course; a refusal is a sentence on the page. */
async function step(event: RequestEvent, work: (form: FormData) => Promise<unknown>) {
	const form = await event.request.formData();
	try {
		await work(form);
	} catch (cause) {
		if (cause instanceof AppError && cause.code !== 'not-found')
			return fail(cause.status, {
				problem: cause.message,
				draft: null,
				errors: {},
				saved: null,
				theirs: null
			});
		throw cause;
	}
	redirect(303, here(event));
}

export const actions = {
	create: guard('report.draft', (event: RequestEvent, actor) =>
		step(event, () => container().services.reports.createDraft(actor, event.params.survey))
	),
	save: guard('report.draft', async (event: RequestEvent, actor) => {
		const form = await event.request.formData();
		const draft = {
			revisionId: text(form, 'revisionId'),
			edition: text(form, 'edition'),
			title: text(form, 'title'),
			summary: text(form, 'summary'),
			findings: form.getAll('findings').map(String)
		};
		const parsed = draftSchema.safeParse(draft);
		if (!parsed.success) {
			const errors: Record<string, string[] | undefined> = z.flattenError(parsed.error).fieldErrors;
			return fail(422, { problem: '', draft, errors, saved: null, theirs: null });
		}
		const { revisionId, ...words } = parsed.data;
		try {
			const saved = await container().services.reports.save(actor, revisionId, words);
			return { problem: '', draft: null, errors: {}, saved, theirs: null };
		} catch (cause) {
			if (!(cause instanceof AppError && cause.code === 'conflict')) throw cause;
			const { current, report } = await container().services.reports.page(actor, event.params.survey);
			const theirs =
				current && report && current.edition !== words.edition
					? {
							edition: current.edition,
							title: report.title,
							summary: current.summary,
							findings: current.findings
						}
					: null;
			return fail(409, { problem: cause.message, draft, errors: {}, saved: null, theirs });
		}
	}),
	useCurrentVerdict: guard('report.draft', (event: RequestEvent, actor) =>
		step(event, (form) => container().services.reports.useCurrentVerdict(actor, text(form, 'revisionId')))
	),
	sendForCheck: guard('report.draft', (event: RequestEvent, actor) =>
		step(event, (form) => container().services.reports.sendForCheck(actor, text(form, 'revisionId')))
	),
	returnToAuthor: guard('report.check', (event: RequestEvent, actor) =>
		step(event, (form) =>
			container().services.reports.returnToAuthor(actor, text(form, 'revisionId'), text(form, 'note'))
		)
	),
	issue: guard('report.check', (event: RequestEvent, actor) =>
		step(event, (form) => container().services.reports.issue(actor, text(form, 'revisionId')))
	),
	preview: guard('report.read', (event: RequestEvent, actor) =>
		step(event, (form) => container().services.reports.preview(actor, text(form, 'revisionId')))
	),
	revise: guard('report.draft', (event: RequestEvent, actor) =>
		step(event, (form) =>
			container().services.reports.startRevision(actor, text(form, 'revisionId'), text(form, 'reason'))
		)
	),
	withdraw: guard('report.check', (event: RequestEvent, actor) =>
		step(event, (form) =>
			container().services.reports.withdraw(actor, text(form, 'revisionId'), text(form, 'reason'))
		)
	)
};
