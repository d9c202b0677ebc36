import { fail, type RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import { AppError } from '$lib/server/app-error';
import {
	acknowledgeForm,
	ACKNOWLEDGEMENT_STATEMENT,
	actionDoneForm,
	questionForm
} from '$lib/portal/acknowledgement';
import type { ReportModel } from '$lib/report/report-model';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent } from './$types';

type ActionEvent = RequestEvent<{ revision: string }>;

export const load = guard('portal.read', async ({ params }: PageServerLoadEvent, actor) => {
	const report = await container().services.portal.report(actor, params.revision);
	const model = JSON.parse(report.revision.model_json ?? 'null') as ReportModel | null;
	const { model_json: _frozen, ...revision } = report.revision;
	return {
		report: { ...report, revision },
		// The page speaks in the frozen report's own words and figures.
		view: model && {
			verdict: model.verdict,
			phaseNames: model.point.phaseNames,
			measuredFrom: model.survey.measuredFrom,
			measuredTo: model.survey.measuredTo,
			issuedAt: model.document.issuedAt,
			summary: model.summary,
			practice: model.practice
		},
		statement: ACKNOWLEDGEMENT_STATEMENT,
		mine: report.acknowledgements.find((entry) => entry.userId === actor.userId) ?? null,
		person: actor.name
	};
});

async function formOf(event: ActionEvent): Promise<Record<string, string>> {
	return Object.fromEntries(
		[...(await event.request.formData())].map(([key, value]) => [key, String(value)])
	);
}

/** The first sentence per field, beside what was typed, so that nothing has to be typed twice. */
function rejected<T extends string>(form: T, values: Record<string, string>, error: z.ZodError) {
	return fail(422, {
		form,
		values,
		errors: z.flattenError(error).fieldErrors as Record<string, string[] | undefined>
	});
}

export const actions = {
	acknowledge: guard('portal.acknowledge', async (event: ActionEvent, actor) => {
		const values = await formOf(event);
		const form = acknowledgeForm.safeParse(values);
		if (!form.success) return rejected('acknowledge', values, form.error);
		try {
			await container().services.portal.acknowledge(
				actor,
				event.params.revision,
				form.data.typedName,
				event.locals.requestId
			);
		} catch (cause) {
			if (cause instanceof AppError && cause.code === 'conflict')
				return fail(409, {
					form: 'acknowledge',
					values,
					errors: { typedName: [cause.message] } as Record<string, string[] | undefined>
				});
			throw cause;
		}
		return { form: 'acknowledge', done: true };
	}),

	ask: guard('portal.query', async (event: ActionEvent, actor) => {
		const values = await formOf(event);
		const form = questionForm.safeParse(values);
		if (!form.success) return rejected('ask', values, form.error);
		const { queries } = container().services;
		if (values['queryId'])
			await queries.reply(actor, values['queryId'], form.data.body, event.locals.requestId);
		else await queries.ask(actor, event.params.revision, form.data.body, event.locals.requestId);
		return { form: 'ask', done: true };
	}),

	done: guard('portal.act', async (event: ActionEvent, actor) => {
		const values = await formOf(event);
		const form = actionDoneForm.safeParse(values);
		if (!form.success) return rejected('done', values, form.error);
		await container().services.portal.completeAction(
			actor,
			form.data.actionId,
			form.data.note,
			event.locals.requestId
		);
		return { form: 'done', done: true };
	})
};
