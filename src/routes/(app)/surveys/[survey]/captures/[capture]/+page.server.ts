import { fail, redirect } from '@sveltejs/kit';
import { countChecks } from '$lib/checks/check-counts';
import { standing } from '$lib/checks/overrule';
import { AppError } from '$lib/server/app-error';
import { container } from '$lib/server/container';
import { guard } from '$lib/server/http/guard';
import type { PageServerLoadEvent, RequestEvent } from './$types';
import { hasErrors, readLines, scalingOf, trendLines, typedLines, waveformLines } from './mapping-form';
import { readStart, startText } from './start-field';

type Detail = Awaited<ReturnType<ReturnType<typeof container>['services']['captures']['detail']>>;

function linesOf({ capture }: Detail) {
	const { facts, settings } = capture;
	return capture.kind === 'waveform'
		? waveformLines(
				facts.channels,
				facts.suggestions,
				settings?.kind === 'waveform' ? settings.channels : null,
				scalingOf(facts.format)
			)
		: trendLines(facts.channels, facts.suggestions, settings?.kind === 'trend' ? settings.columns : null);
}

export const load = guard('capture.read', async (event: PageServerLoadEvent, actor) => {
	const detail = await container().services.captures.detail(actor, event.params.survey, event.params.capture);
	const checks = (await container().services.checks.ofSurvey(actor, event.params.survey)).captures.find(
		({ id }) => id === detail.capture.id
	)?.checks;
	const { suggestions: _suggestions, ...facts } = detail.capture.facts;
	return {
		surveyId: detail.survey.id,
		timeZone: detail.survey.timeZone,
		phaseNames: detail.survey.facts.phaseNames,
		system: detail.survey.facts.system,
		capture: { ...detail.capture, facts, settings: undefined },
		isConfirmed: detail.capture.settings !== null,
		checks: checks
			? {
					counts: countChecks(checks),
					blocking: standing(checks, 'blocks').map(({ check }) => check.sentence)
				}
			: null,
		jobs: detail.jobs,
		lines: linesOf(detail),
		recordedWith: await container().services.captureInstrument.of(
			actor,
			event.params.survey,
			event.params.capture
		),
		scaling: scalingOf(facts.format),
		start: startText(facts.start, detail.capture.startedAt, detail.survey.timeZone)
	};
});

export const actions = {
	confirm: guard('capture.write', async (event: RequestEvent, actor) => {
		const { survey: surveyId, capture: captureId } = event.params;
		const { captures } = container().services;
		const detail = await captures.detail(actor, surveyId, captureId);
		const form = await event.request.formData();
		const lines = typedLines(linesOf(detail), form);
		const { mappings, errors } = readLines(
			lines,
			detail.survey.facts.phaseNames,
			scalingOf(detail.capture.facts.format)
		);
		const start = readStart(form.get('start'), detail.capture.facts.start, detail.survey.timeZone);
		if (!start.ok) errors.start = start.problem;
		if (hasErrors(errors) || !start.ok)
			return fail(422, { lines, errors, start: String(form.get('start') ?? '') });
		await captures.confirm(actor, surveyId, captureId, {
			settings:
				detail.capture.kind === 'waveform'
					? {
							kind: 'waveform',
							channels: mappings.map(({ index, ...mapping }) => ({ channelIndex: index, ...mapping }))
						}
					: {
							kind: 'trend',
							columns: mappings.map(({ index, ...mapping }) => ({ seriesIndex: index, ...mapping }))
						},
			startedAt: start.value
		});
		redirect(303, `/surveys/${surveyId}/captures/${captureId}`);
	}),

	instrument: guard('capture.write', async (event: RequestEvent, actor) => {
		const { survey, capture } = event.params;
		const chosen = String((await event.request.formData()).get('instrument') ?? '');
		await container().services.captureInstrument.choose(
			actor,
			survey,
			capture,
			chosen === '' ? null : chosen
		);
		redirect(303, `/surveys/${survey}/captures/${capture}`);
	}),

	remove: guard('capture.write', async (event: RequestEvent, actor) => {
		const { survey: surveyId, capture: captureId } = event.params;
		try {
			await container().services.captures.remove(actor, surveyId, captureId);
		} catch (cause) {
			if (cause instanceof AppError && cause.code === 'conflict')
				return fail(409, { removeProblem: cause.message });
			throw cause;
		}
		redirect(303, `/surveys/${surveyId}/captures`);
	})
};
