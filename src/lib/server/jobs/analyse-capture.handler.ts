import { ENGINE_VERSION } from '../../harmonics/engine-version';
import { nominalVoltagesByPhase_V } from '../../harmonics/nominal-voltages';
import type { OpenedCapture } from '../../recording/read-capture';
import { parseSettings } from '../analysis/capture-settings';
import {
	prepareTrend,
	prepareWaveform,
	type PreparedAnalysis,
	type StorePart
} from '../analysis/prepare-analysis';
import type { Container } from '../container';
import { withTransaction, type Db } from '../db/database';
import type { CaptureRow } from '../db/rows';
import { captureSurvey, type CaptureSurvey } from '../read-models/capture-list';
import { analysesRepository } from '../repositories/analyses.repository';
import { capturesRepository } from '../repositories/captures.repository';
import { storedFilesRepository } from '../repositories/stored-files.repository';
import { releaseCapture } from '../services/captures.service';
import { analyseCapture } from './analyse-capture.job';
import { assessSurvey } from './assess-survey.job';
import type { JobHandler } from './handlers';
import { JobCancelled, JobFailed, JobInterrupted, type JobContext } from './job-definition';
import { openOriginals } from './open-originals';

export const handle: JobHandler = async (container, rawPayload, context) => {
	const { captureId, surveyId } = analyseCapture.payload.parse(rawPayload);
	const { db, clock } = container;
	const captures = capturesRepository(db, context);
	const capture = await captures.byId(captureId);
	const survey = await captureSurvey(db, context, surveyId);
	if (!capture || !survey) throw new JobFailed('The capture was removed before it could be analysed.');
	try {
		await captures.update(captureId, { status: 'analysing', problem: null }, clock());
		const analyses = analysesRepository(db, context);
		await analyses.discardUnfinished(captureId);
		const analysisId = await analyses.begin({
			client_id: capture.client_id,
			capture_id: captureId,
			engine_version: ENGINE_VERSION,
			created_at: clock().toISOString()
		});
		const storePart: StorePart = (part) =>
			withTransaction(db, (trx) => analysesRepository(trx, context).addPart(analysisId, part));
		const { content, close } = await openOriginals(container, capture, context);
		const prepared = await prepare(container, capture, survey, content, context, storePart).finally(close);
		await context.progress(1, 1, 'storing the readings');
		await withTransaction(db, (trx) => save(container, trx, capture, analysisId, prepared, context));
	} catch (cause) {
		await settle(container, captureId, cause, context);
		throw cause;
	}
};

async function prepare(
	container: Container,
	capture: CaptureRow,
	survey: CaptureSurvey,
	content: OpenedCapture,
	context: JobContext,
	storePart: StorePart
): Promise<PreparedAnalysis> {
	if (capture.mappings_json === null || capture.started_at === null)
		throw new JobFailed(
			'The channels of this capture are not confirmed yet. Confirm them and analyse again.'
		);
	const settings = parseSettings(capture.mappings_json);
	const basis = {
		start_ms: Date.parse(capture.started_at),
		nominalFrequency_Hz: survey.facts.nominalFrequency_Hz,
		nominalVoltages_V: nominalVoltagesByPhase_V(survey.facts.system, survey.facts.nominalVoltage_V),
		phaseNames: survey.facts.phaseNames
	};
	const isUncalibrated =
		content.format === 'WAV' &&
		settings.kind === 'waveform' &&
		settings.channels.some(({ fullScale }) => fullScale === undefined);
	if (isUncalibrated)
		throw new JobFailed(
			'A channel of this capture is not calibrated. State what its full scale means, such as 250 V, and confirm again.'
		);
	if (content.kind === 'waveform' && settings.kind === 'waveform')
		return prepareWaveform(container, content, settings.channels, basis, context, storePart);
	if (content.kind === 'trend' && settings.kind === 'trend')
		return prepareTrend(content, settings.columns, basis);
	throw new JobFailed('The confirmed channels do not fit what the files hold. Confirm them again.');
}

/** Everything that an analysis leaves behind, and the end of the job, stand or fall together. */
async function save(
	container: Container,
	trx: Db,
	capture: CaptureRow,
	analysisId: string,
	prepared: PreparedAnalysis,
	context: JobContext
): Promise<void> {
	const now = container.clock();
	const files = await capturesRepository(trx, context).filesOf([capture.id]);
	if (prepared.samples)
		await storedFilesRepository(trx).record(prepared.samples, 'application/x-sinewright-samples', now);
	const analyses = analysesRepository(trx, context);
	await analyses.addPart(analysisId, prepared.last);
	await analyses.complete(analysisId, capture.id, {
		engine_version: prepared.engineVersion,
		parameters_json: JSON.stringify({
			...prepared.parameters,
			settings: parseSettings(capture.mappings_json ?? 'null'),
			fileHashes: files.map((file) => file.sha256)
		}),
		summary_json: JSON.stringify(prepared.summary),
		created_at: now.toISOString()
	});
	await capturesRepository(trx, context).update(capture.id, { status: 'analysed', problem: null }, now);
	await container.jobs.enqueue(
		trx,
		assessSurvey,
		{ surveyId: capture.survey_id },
		{ practiceId: context.practiceId }
	);
	await context.finish(trx);
}

/** Leaves the capture in a state that tells the truth about how the attempt ended. */
async function settle(
	container: Container,
	captureId: string,
	cause: unknown,
	context: JobContext
): Promise<void> {
	const { db, clock } = container;
	const captures = capturesRepository(db, context);
	await analysesRepository(db, context).discardUnfinished(captureId);
	if (cause instanceof JobInterrupted) await captures.update(captureId, { status: 'queued' }, clock());
	else if (cause instanceof JobCancelled) await releaseCapture(db, context, captureId, clock());
	else {
		const problem =
			cause instanceof JobFailed
				? cause.message
				: `Something went wrong on our side. Quote reference ${context.jobId}.`;
		await captures.update(captureId, { status: 'failed', problem }, clock());
	}
}
