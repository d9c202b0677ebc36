import type { Actor } from '../../access/access';
import type { PhaseNames } from '../../recording/phase';
import { AppError, requireFound } from '../app-error';
import { parseSummary } from '../analysis/analysis-summary';
import { readWaveformSlice, type WaveformRange, type WaveformSlice } from '../analysis/waveform-slice';
import { requirePermission } from '../auth/require-permission';
import { captureSurvey } from '../read-models/capture-list';
import { READING_VIEWS, type ReadingView } from '../read-models/readings/reading-views';
import { readings, type Readings, type ReadingsQuestion } from '../read-models/readings/readings';
import { analysesRepository } from '../repositories/analyses.repository';
import type { Overrule } from '../../checks/overrule';
import { checkOverrulesRepository } from '../repositories/check-overrules.repository';
import { capturesRepository } from '../repositories/captures.repository';
import { scopeOf } from '../repositories/scope';
import type { ServiceDeps } from '../service-deps';

export interface ReadingsPage {
	survey: { id: string; timeZone: string; phaseNames: PhaseNames; advisory: boolean };
	/** Captures of the survey that have been analysed, and how many have not. */
	captures: { id: string; name: string; kind: 'waveform' | 'trend'; startedAt: string | null }[];
	notAnalysed: number;
	/** The capture shown; null when none has been analysed. */
	captureId: string | null;
	/** The view shown, and all there are. */
	view: ReadingView;
	views: typeof READING_VIEWS;
	readings: Readings | null;
	/** Remarks of the capture shown that an engineer has overruled. */
	overruled: OverruledRemark[];
}

export type OverruledRemark = Pick<Overrule, 'code' | 'channelIndex' | 'sentence' | 'reason' | 'by'>;

/** Figures of one capture, as the readings page and the waveform view ask for them. */
export function createReadingsService({ db, blobs }: ServiceDeps) {
	async function page(
		actor: Actor,
		surveyId: string,
		captureId: string | null,
		asked: ReadingsQuestion
	): Promise<ReadingsPage> {
		requirePermission(actor, 'capture.read');
		const scope = scopeOf(actor);
		const survey = requireFound(await captureSurvey(db, scope, surveyId), 'survey');
		const rows = await capturesRepository(db, scope).ofSurvey(survey.id);
		const analysed = new Set(
			(await analysesRepository(db, scope).currentOfSurvey(survey.id)).map((analysis) => analysis.capture_id)
		);
		const captures = rows.filter((row) => analysed.has(row.id));
		const shown = captures.find((row) => row.id === captureId) ?? captures[0];
		if (captureId !== null && shown?.id !== captureId && !rows.some((row) => row.id === captureId))
			throw new AppError('not-found', 'This capture does not exist, or you have no access to it.');
		const overrules = await checkOverrulesRepository(db, scope).ofSurvey(survey.id);
		return {
			survey: {
				id: survey.id,
				timeZone: survey.timeZone,
				phaseNames: survey.facts.phaseNames,
				advisory: survey.facts.kind === 'in-plant'
			},
			captures: captures.flatMap(({ id, name, kind, started_at: startedAt }) =>
				kind === 'table' ? [] : [{ id, name, kind, startedAt }]
			),
			notAnalysed: rows.length - captures.length,
			captureId: shown?.id ?? null,
			view: asked.view,
			views: READING_VIEWS,
			readings: shown ? await readings(db, blobs, scope, survey, shown, asked) : null,
			overruled: overrules
				.filter((one) => one.captureId === shown?.id && one.takenBackAt === null)
				.map(({ code, channelIndex, sentence, reason, by }) => ({ code, channelIndex, sentence, reason, by }))
		};
	}

	/** Samples of a stretch of an analysed waveform, raw or thinned to about the points asked for. */
	async function waveform(
		actor: Actor,
		captureId: string,
		asked: WaveformRange & { channels?: readonly number[] | undefined }
	): Promise<WaveformSlice> {
		requirePermission(actor, 'capture.read');
		const scope = scopeOf(actor);
		const capture = requireFound(await capturesRepository(db, scope).byId(captureId), 'capture');
		const analysis = await analysesRepository(db, scope).currentOf(capture.id);
		const summary = analysis ? parseSummary(analysis.summary_json) : null;
		if (summary?.kind !== 'waveform')
			throw new AppError(
				'conflict',
				'This capture has no waveform to show yet. Confirm its channels; the view is made with the analysis.'
			);
		const channels = asked.channels ?? summary.samples.channels.map((channel) => channel.channelIndex);
		return readWaveformSlice(blobs, summary.samples, asked, channels);
	}

	return { page, waveform };
}
