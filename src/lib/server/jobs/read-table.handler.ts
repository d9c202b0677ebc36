import { openCapture } from '../../recording/read-capture';
import { parseToldLayout } from '../../recording/readers/delimited-text/table-layout-told';
import { factsOfContent, startedAt } from '../analysis/recognised-facts';
import { withTransaction } from '../db/database';
import { captureSurvey } from '../read-models/capture-list';
import { measuringInstrument } from '../read-models/measuring-instrument';
import { capturesRepository } from '../repositories/captures.repository';
import { openFileHandle, type FileHandle } from '../storage/file-handle';
import { createScratchFolder, scratchRoot } from '../storage/scratch-folder';
import type { JobHandler } from './handlers';
import { JobFailed } from './job-definition';
import { makePyramid, pyramidKey } from './make-pyramid.job';
import { readTable } from './read-table.job';

/** Reads a table whole by what was told; the capture then waits for its channels, or still for its columns. */
export const handle: JobHandler = async (container, rawPayload, context) => {
	const { captureId, surveyId } = readTable.payload.parse(rawPayload);
	const { db, clock } = container;
	const captures = capturesRepository(db, context);
	const capture = await captures.byId(captureId);
	const survey = await captureSurvey(db, context, surveyId);
	if (!capture || !survey || capture.layout_json === null)
		throw new JobFailed('The capture was removed before its table could be read.');
	const handles: FileHandle[] = [];
	const scratch = createScratchFolder(scratchRoot(container.config.dataDir));
	try {
		for (const file of await captures.filesOf([captureId])) {
			await context.progress(0, 1, `reading ${file.name}`);
			handles.push(openFileHandle(file.name, await container.blobs.localFile(file.sha256)));
		}
		const opened = openCapture(handles, { scratch, layout: parseToldLayout(capture.layout_json) });
		if (!opened.ok) {
			await captures.update(captureId, { problem: opened.problem.sentence }, clock());
			throw new JobFailed(opened.problem.sentence);
		}
		const content = opened.value;
		const instrument = await measuringInstrument(db, context, capture.instrument_id ?? survey.instrumentId);
		const facts = factsOfContent(content, survey, instrument);
		await context.progress(1, 1, 'storing what was recognised');
		await withTransaction(db, async (trx) => {
			await capturesRepository(trx, context).update(
				captureId,
				{
					kind: content.kind,
					variant: content.variant,
					status: 'recognised',
					facts_json: JSON.stringify(facts),
					started_at: startedAt(content, survey),
					duration_s: facts.duration_s,
					problem: null,
					// What was drawn of another reading of the columns is not this capture any more.
					pyramid_sha256: null,
					pyramid_json: null
				},
				clock()
			);
			if (content.kind === 'waveform')
				await container.jobs.enqueue(
					trx,
					makePyramid,
					{ surveyId: capture.survey_id, captureId },
					{ practiceId: context.practiceId, dedupeKey: pyramidKey(captureId) }
				);
			await context.finish(trx);
		});
	} finally {
		for (const handle of handles) handle.close();
		scratch.close();
	}
};
