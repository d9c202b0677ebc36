import { appendAudit } from '../audit/audit-log';
import type { Container } from '../container';
import { withTransaction } from '../db/database';
import { storedFilesRepository } from '../repositories/stored-files.repository';
import { uploadsRepository } from '../repositories/uploads.repository';
import { sortIntoCaptures, type IntakeOutcome } from '../services/intake/sort-into-captures';
import { cleanFileName } from '../services/intake/file-name';
import { ArchiveRefused, unpackArchive, type ArchiveLimits, type LeftOut } from '../storage/archive';
import type { StoredBlob } from '../storage/blob-store';
import type { JobHandler } from './handlers';
import { JobCancelled, JobFailed, type JobContext } from './job-definition';
import { unpackArchiveJob } from './unpack-archive.job';

/** More files than a recorder writes for one survey. */
const MOST_ENTRIES = 2000;
/** Together an archive may hold so many times the largest single file. */
const TOTAL_FILES = 2;

type Unpacked = StoredBlob & { name: string };

function limitsOf({ config }: Container): ArchiveLimits {
	return {
		entries: MOST_ENTRIES,
		entry_bytes: config.uploadLimit_bytes,
		total_bytes: TOTAL_FILES * config.uploadLimit_bytes
	};
}

/** Every file of the archive in storage; what became of nothing else is only bytes that nobody refers to. */
async function unpack(
	container: Container,
	path: string,
	name: string,
	context: JobContext
): Promise<{ files: Unpacked[]; leftOut: LeftOut[] }> {
	const files: Unpacked[] = [];
	const leftOut = await unpackArchive(
		path,
		name,
		limitsOf(container),
		async (entryName, size_bytes, content) => {
			await context.progress(files.length, files.length + 1, `unpacking ${entryName}`);
			const blob = await container.blobs.putStream(content, size_bytes);
			files.push({ ...blob, name: cleanFileName(entryName) });
		}
	);
	return { files, leftOut };
}

export const handle: JobHandler = async (container, rawPayload, context) => {
	const payload = unpackArchiveJob.payload.parse(rawPayload);
	const { db, blobs, clock } = container;
	const { surveyId, uploadId, name } = payload;
	const sender = { ...payload.requestedBy, practiceId: context.practiceId };
	try {
		const [archive] = await uploadsRepository(db, context).ofSurvey(surveyId, [uploadId]);
		if (!archive) throw new JobFailed(`${name} is no longer there. Choose it again.`);
		const { files, leftOut } = await unpack(container, await blobs.localFile(archive.sha256), name, context);
		if (files.length === 0)
			throw new JobFailed(leftOut[0]?.sentence ?? `${name} holds no files. Pack the recorder's files again.`);
		await withTransaction(db, async (trx) => {
			const now = clock();
			const uploads = uploadsRepository(trx, context);
			const ids: string[] = [];
			for (const { name: fileName, sha256, size_bytes } of files) {
				await storedFilesRepository(trx).record({ sha256, size_bytes }, 'application/octet-stream', now);
				ids.push(
					await uploads.add({
						survey_id: surveyId,
						name: fileName,
						sha256,
						size_bytes,
						from_archive: name,
						uploaded_by: sender.userId,
						created_at: now.toISOString()
					})
				);
			}
			await uploads.remove([uploadId]);
			const rows = await uploads.ofSurvey(surveyId, ids);
			const outcome = await sortIntoCaptures(trx, container, sender, surveyId, rows);
			const remark = remarkOn(name, outcome, leftOut);
			await appendAudit(
				trx,
				sender,
				{
					action: 'capture.unpacked',
					subjectKind: 'survey',
					subjectId: surveyId,
					detail: { archive: name, files: files.map((file) => ({ name: file.name, sha256: file.sha256 })) }
				},
				now
			);
			// Nothing of it can be read: that is a failure, told as one.
			await container.jobs.end(trx, context.jobId, outcome.jobs.length > 0 ? 'done' : 'failed', remark);
		});
	} catch (cause) {
		if (cause instanceof JobCancelled || cause instanceof ArchiveRefused || cause instanceof JobFailed)
			await uploadsRepository(db, context).remove([uploadId]);
		if (cause instanceof ArchiveRefused) throw new JobFailed(cause.message);
		throw cause;
	}
};

/** What of the archive is not read, in sentences; null when all of it is. */
function remarkOn(
	name: string,
	{ problems, duplicates }: IntakeOutcome,
	leftOut: readonly LeftOut[]
): string | null {
	const sentences = [
		...leftOut.map(({ sentence }) => sentence),
		...problems.map(({ sentence }) => sentence),
		...duplicates.map(
			({ files, captureName }) =>
				`${files.join(', ')} is in this survey already, as ${captureName}; nothing was added.`
		)
	];
	const shown = sentences.slice(0, 8);
	const more = sentences.length - shown.length;
	if (more > 0) shown.push(`${more} more of the files in ${name} were left out for reasons like these.`);
	return shown.length === 0 ? null : shown.join(' ');
}
