import { openCaptureParts, type OpenedCapture } from '../../recording/read-capture';
import type { CapturePart } from '../../recording/recording';
import { factsOfContent, factsOfUntoldTable, startedAt } from '../analysis/recognised-facts';
import { templateFor, type FittingTemplate } from '../analysis/template-for-table';
import { appendAudit } from '../audit/audit-log';
import type { Container } from '../container';
import { withTransaction, type Db } from '../db/database';
import type { UploadRow } from '../db/rows';
import { captureSurvey, type CaptureSurvey } from '../read-models/capture-list';
import { instrumentNamedBy, measuringInstrument } from '../read-models/measuring-instrument';
import { capturesRepository } from '../repositories/captures.repository';
import { layoutTemplatesRepository } from '../repositories/layout-templates.repository';
import { uploadsRepository } from '../repositories/uploads.repository';
import { openFileHandle, type FileHandle } from '../storage/file-handle';
import { createScratchFolder, scratchRoot } from '../storage/scratch-folder';
import type { JobHandler } from './handlers';
import { JobCancelled, JobFailed, type JobContext } from './job-definition';
import { makePyramid, pyramidKey } from './make-pyramid.job';
import { recogniseCapture } from './recognise-capture.job';

/** Opens the uploads; binary samples are not read. */
async function openFiles(
	container: Container,
	uploads: UploadRow[],
	context: JobContext,
	handles: FileHandle[]
): Promise<void> {
	const total_bytes = uploads.reduce((sum, upload) => sum + upload.size_bytes, 0);
	let done_bytes = 0;
	for (const upload of uploads) {
		await context.progress(done_bytes, total_bytes + 1, `reading ${upload.name}`);
		handles.push(openFileHandle(upload.name, await container.blobs.localFile(upload.sha256)));
		done_bytes += upload.size_bytes;
	}
	await context.progress(done_bytes, total_bytes + 1, 'recognising what the files hold');
}

/** Lets go of the uploads and ends the job with the reader's sentence, in one transaction: nothing stays half. */
async function giveUp(
	container: Container,
	context: JobContext,
	uploadIds: readonly string[],
	sentence: string
): Promise<never> {
	await withTransaction(container.db, async (trx) => {
		await uploadsRepository(trx, context).remove(uploadIds);
		await container.jobs.end(trx, context.jobId, 'failed', sentence);
	});
	throw new JobFailed(sentence);
}

/** One recording or trend of the files as a capture of its own. */
async function addCapture(
	{ clock, jobs }: Container,
	trx: Db,
	context: JobContext,
	payload: ReturnType<typeof recogniseCapture.payload.parse>,
	survey: CaptureSurvey,
	uploads: readonly UploadRow[],
	{ key, title, content }: CapturePart<OpenedCapture>,
	fitting: FittingTemplate | null
): Promise<void> {
	const namedInstrument = await instrumentNamedBy(trx, context, [content.recorderName, content.stationName]);
	const instrument = await measuringInstrument(trx, context, namedInstrument ?? survey.instrumentId);
	const facts = factsOfContent(content, survey, instrument);
	if (fitting) facts.remarks = [fitting.remark, ...facts.remarks];
	const id = await capturesRepository(trx, context).add({
		capture: {
			client_id: survey.clientId,
			survey_id: survey.id,
			name: title === '' ? payload.name : `${payload.name} · ${title}`,
			kind: content.kind,
			format: content.format,
			variant: content.variant,
			facts_json: JSON.stringify(facts),
			started_at: startedAt(content, survey),
			duration_s: facts.duration_s,
			uploaded_by: payload.requestedBy.userId,
			created_at: clock().toISOString(),
			part_key: key,
			layout_json: fitting ? JSON.stringify(fitting.layout) : null,
			layout_template_id: fitting?.templateId ?? null,
			// The survey's own needs no naming: it follows when the survey's is changed.
			instrument_id: namedInstrument === survey.instrumentId ? null : namedInstrument
		},
		files: uploads.map(({ name, sha256, size_bytes }) => ({ name, sha256, size_bytes }))
	});
	await appendAudit(
		trx,
		{ ...payload.requestedBy, practiceId: context.practiceId },
		{
			action: 'capture.recognised',
			subjectKind: 'capture',
			subjectId: id,
			detail: { format: content.format, variant: content.variant }
		},
		clock()
	);
	if (content.kind === 'waveform')
		await jobs.enqueue(
			trx,
			makePyramid,
			{ surveyId: survey.id, captureId: id },
			{ practiceId: context.practiceId, dedupeKey: pyramidKey(id) }
		);
}

/** A table of numbers whose columns only a person can tell: it is kept, and waits. */
async function addUntoldTable(
	{ clock }: Container,
	trx: Db,
	context: JobContext,
	payload: ReturnType<typeof recogniseCapture.payload.parse>,
	survey: CaptureSurvey,
	uploads: readonly UploadRow[],
	handles: readonly FileHandle[],
	sentence: string
): Promise<void> {
	const facts = factsOfUntoldTable(handles);
	const id = await capturesRepository(trx, context).add({
		capture: {
			client_id: survey.clientId,
			survey_id: survey.id,
			name: payload.name,
			kind: 'table',
			status: 'unread',
			format: facts.format,
			variant: facts.variant,
			facts_json: JSON.stringify(facts),
			started_at: null,
			duration_s: 0,
			problem: sentence,
			uploaded_by: payload.requestedBy.userId,
			created_at: clock().toISOString(),
			part_key: ''
		},
		files: uploads.map(({ name, sha256, size_bytes }) => ({ name, sha256, size_bytes }))
	});
	await appendAudit(
		trx,
		{ ...payload.requestedBy, practiceId: context.practiceId },
		{ action: 'capture.kept-untold', subjectKind: 'capture', subjectId: id, detail: { problem: sentence } },
		clock()
	);
}

export const handle: JobHandler = async (container, rawPayload, context) => {
	const payload = recogniseCapture.payload.parse(rawPayload);
	const { db } = container;
	const survey = await captureSurvey(db, context, payload.surveyId);
	const uploads = await uploadsRepository(db, context).ofSurvey(payload.surveyId, payload.uploadIds);
	if (!survey || uploads.length !== payload.uploadIds.length)
		return giveUp(
			container,
			context,
			payload.uploadIds,
			'The uploaded files are no longer there. Choose them again.'
		);
	const handles: FileHandle[] = [];
	const scratch = createScratchFolder(scratchRoot(container.config.dataDir));
	try {
		await openFiles(container, uploads, context, handles);
		const fitting = await templateFor(db, context, handles);
		const read = openCaptureParts(handles, { scratch, ...(fitting ? { layout: fitting.layout } : {}) });
		if (!read.ok && read.problem.isTable !== true)
			return await giveUp(container, context, payload.uploadIds, read.problem.sentence);
		await context.progress(0, 1, 'storing what was recognised');
		await withTransaction(db, async (trx) => {
			if (!read.ok) {
				const { sentence } = read.problem;
				await addUntoldTable(container, trx, context, payload, survey, uploads, handles, sentence);
			} else {
				for (const part of read.value)
					await addCapture(container, trx, context, payload, survey, uploads, part, fitting);
				if (fitting)
					await layoutTemplatesRepository(trx, context).noteUse(
						fitting.templateId,
						container.clock().toISOString()
					);
			}
			await uploadsRepository(trx, context).remove(payload.uploadIds);
			await context.finish(trx);
		});
	} catch (cause) {
		if (cause instanceof JobCancelled) await uploadsRepository(db, context).remove(payload.uploadIds);
		throw cause;
	} finally {
		for (const handle of handles) handle.close();
		scratch.close();
	}
};
