import { captureFacts } from '../../recording/capture-facts';
import { suggestMappings } from '../../recording/channel-suggestion';
import { openCaptureParts, type OpenedCapture } from '../../recording/read-capture';
import type { CapturePart } from '../../recording/recording';
import { startToUtc_ms } from '../../recording/recording-start';
import { appendAudit } from '../audit/audit-log';
import type { Container } from '../container';
import { withTransaction, type Db } from '../db/database';
import type { UploadRow } from '../db/rows';
import { captureSurvey, type CaptureSurvey, type StoredFacts } from '../read-models/capture-list';
import { capturesRepository } from '../repositories/captures.repository';
import { uploadsRepository } from '../repositories/uploads.repository';
import { openFileHandle, type FileHandle } from '../storage/file-handle';
import { createScratchFolder, scratchRoot } from '../storage/scratch-folder';
import type { JobHandler } from './handlers';
import { JobCancelled, JobFailed, type JobContext } from './job-definition';
import { recogniseCapture } from './recognise-capture.job';

/** The start instant, where the file alone tells it or the site's zone completes it. */
function startedAt(content: OpenedCapture, survey: CaptureSurvey): string | null {
	if (!content.start) return null;
	return new Date(startToUtc_ms(content.start, survey.timeZone).utc_ms).toISOString();
}

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
	{ clock }: Container,
	trx: Db,
	context: JobContext,
	payload: ReturnType<typeof recogniseCapture.payload.parse>,
	survey: CaptureSurvey,
	uploads: readonly UploadRow[],
	{ key, title, content }: CapturePart<OpenedCapture>
): Promise<void> {
	const facts: StoredFacts = {
		...captureFacts(content, survey.facts.nominalFrequency_Hz),
		suggestions: suggestMappings(content, survey.facts)
	};
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
			part_key: key
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
		const read = openCaptureParts(handles, { scratch });
		if (!read.ok) return await giveUp(container, context, payload.uploadIds, read.problem.sentence);
		await context.progress(0, 1, 'storing what was recognised');
		await withTransaction(db, async (trx) => {
			for (const part of read.value)
				await addCapture(container, trx, context, payload, survey, uploads, part);
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
