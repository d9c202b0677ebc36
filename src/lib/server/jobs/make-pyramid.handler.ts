import type { CaptureSource } from '../../recording/sample-source';
import type { PyramidLayout } from '../../recording/pyramid/pyramid-layout';
import { writePyramid } from '../analysis/write-pyramid';
import { withTransaction } from '../db/database';
import type { CaptureFileRow } from '../db/rows';
import { capturesRepository } from '../repositories/captures.repository';
import { storedFilesRepository } from '../repositories/stored-files.repository';
import type { FileHandle } from '../storage/file-handle';
import type { JobHandler } from './handlers';
import { JobFailed } from './job-definition';
import { makePyramid } from './make-pyramid.job';
import { openOriginals } from './open-originals';

export const handle: JobHandler = async (container, rawPayload, context) => {
	const { captureId } = makePyramid.payload.parse(rawPayload);
	const { db, clock, blobs } = container;
	const capture = await capturesRepository(db, context).byId(captureId);
	if (!capture) throw new JobFailed('The capture was removed before its view could be made.');
	if (capture.pyramid_sha256 !== null) return;
	const { content, files, handles, close } = await openOriginals(container, capture, context);
	try {
		if (content.kind !== 'waveform') throw new JobFailed('Only a capture of samples has a waveform view.');
		if (content.sampleCount === 0 || content.channels.length === 0)
			throw new JobFailed('This capture has no samples of analogue channels that could be drawn.');
		const { blob, stored } = await writePyramid(
			blobs,
			content,
			singleSamplesOf(content, files, handles),
			(done) =>
				context.progress(
					Math.min(done, content.sampleCount),
					content.sampleCount + 1,
					`${Math.floor((100 * done) / content.sampleCount)} % of the samples drawn`
				)
		);
		await withTransaction(db, async (trx) => {
			const captures = capturesRepository(trx, context);
			// Told meanwhile that its columns are something else: the next view is made of those.
			const isSame = (await captures.byId(captureId))?.layout_json === capture.layout_json;
			if (!isSame) return context.finish(trx);
			await storedFilesRepository(trx).record(blob, 'application/x-sinewright-pyramid', clock());
			await captures.update(
				captureId,
				{ pyramid_sha256: blob.sha256, pyramid_json: JSON.stringify(stored) },
				clock()
			);
			await context.finish(trx);
		});
	} finally {
		close();
	}
};

/** Rows in one of the originals can be read there again; scratch and decoded samples are gone after this work. */
function singleSamplesOf(
	{ samples }: CaptureSource,
	files: readonly CaptureFileRow[],
	handles: readonly FileHandle[]
): PyramidLayout['levelZero'] {
	if (samples.kind !== 'rows' || !samples.file) return { kind: 'stored' };
	const at = handles.indexOf(samples.file as FileHandle);
	const file = files[at];
	if (!file) return { kind: 'stored' };
	const { format, lowestIsValue, rowBytes, offsets, factors, additions } = samples.layout;
	return {
		kind: 'rows',
		sha256: file.sha256,
		firstByte: samples.firstByte ?? 0,
		layout: {
			format,
			...(lowestIsValue === undefined ? {} : { lowestIsValue }),
			rowBytes,
			offsets: [...offsets],
			factors: [...factors],
			additions: [...additions]
		}
	};
}
