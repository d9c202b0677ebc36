import { Readable } from 'node:stream';
import type { ReadableStream as WebReadableStream } from 'node:stream/web';
import type { Actor } from '../../access/access';
import { groupCaptureFiles, incompleteGroupSentence } from '../../recording/group-capture-files';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import type { UploadRow } from '../db/rows';
import { recogniseCapture } from '../jobs/recognise-capture.job';
import { captureSurvey } from '../read-models/capture-list';
import { capturesRepository } from '../repositories/captures.repository';
import { scopeOf } from '../repositories/scope';
import { storedFilesRepository } from '../repositories/stored-files.repository';
import { uploadsRepository } from '../repositories/uploads.repository';
import type { ServiceDeps } from '../service-deps';
import { BlobTooLarge } from '../storage/blob-store';

const FORGOTTEN_AFTER_MS = 24 * 3600_000;
const LONGEST_NAME = 200;

export interface ReceivedUpload {
	id: string;
	name: string;
	size_bytes: number;
	sha256: string;
}

/** What became of the files handed in together. */
export interface IntakeOutcome {
	/** One job per set of files that belongs together. */
	jobs: { jobId: string; name: string; files: string[] }[];
	/** Files that cannot become a capture, each with a sentence that says what to do. */
	problems: { files: string[]; sentence: string }[];
	/** Sets whose content is in the survey already. */
	duplicates: { captureId: string; captureName: string; files: string[] }[];
}

/** The last part of whatever path a browser sent, without control characters. */
export function cleanFileName(raw: string): string {
	const last = raw.split(/[\\/]/).at(-1) ?? '';
	// eslint-disable-next-line no-control-regex -- control characters are what is taken out
	const name = last.replace(/[\u0000-\u001f\u007f]/g, '').trim();
	if (name === '' || name === '.' || name === '..')
		throw new AppError('invalid', 'The file has no name. Give it one and choose it again.');
	if (name.length > LONGEST_NAME)
		throw new AppError(
			'invalid',
			`The file name is longer than ${LONGEST_NAME} characters. Shorten it and choose the file again.`
		);
	return name;
}

function storageFailure(cause: unknown, name: string): AppError {
	if (cause instanceof BlobTooLarge || (cause as { status?: number }).status === 413) {
		const limit =
			cause instanceof BlobTooLarge ? ` (at most ${Math.floor(cause.limit_bytes / 1024 / 1024)} MB)` : '';
		return new AppError(
			'invalid',
			`${name} is larger than this installation takes${limit}. Export a shorter stretch, or ask for a higher limit.`,
			{ cause }
		);
	}
	return new AppError(
		'unavailable',
		`${name} did not arrive whole. Check the connection and choose it again.`,
		{ cause }
	);
}

/** The files that belong together, by their names; two files of one name stay apart. */
function groupRows(rows: readonly UploadRow[]): UploadRow[][] {
	const waiting = [...rows];
	return groupCaptureFiles(rows.map((row) => row.name)).map((names) =>
		names.flatMap((name) => {
			const at = waiting.findIndex((row) => row.name === name);
			return at < 0 ? [] : waiting.splice(at, 1);
		})
	);
}

/** A set goes by its stem, a single file by its whole name. */
function captureName(set: readonly UploadRow[]): string {
	const first = set[0]?.name ?? '';
	return set.length > 1 ? first.replace(/\.[^.]*$/, '') : first;
}

/** Files on their way to becoming captures: received, grouped into sets, handed to the worker. */
export function createUploadsService(deps: ServiceDeps) {
	const { db, blobs, jobs, config, clock } = deps;

	/** Streams one file into storage. Nothing of it stays when it does not arrive whole. */
	async function receive(
		actor: Actor,
		surveyId: string,
		rawName: string,
		body: WebReadableStream<Uint8Array> | null
	): Promise<ReceivedUpload> {
		requirePermission(actor, 'capture.write');
		const survey = requireFound(await captureSurvey(db, scopeOf(actor), surveyId), 'survey');
		const name = cleanFileName(rawName);
		if (!body) throw new AppError('invalid', `${name} arrived without content. Choose the file again.`);
		const content = Readable.fromWeb(body);
		// A connection cut before storage has begun to read would end the process: nobody listens yet.
		content.on('error', () => undefined);
		const blob = await blobs.putStream(content, config.uploadLimit_bytes).catch((cause: unknown) => {
			throw storageFailure(cause, name);
		});
		if (blob.size_bytes === 0)
			throw new AppError('invalid', `${name} is empty. Copy it from the recorder again.`);
		const now = clock();
		const id = await withTransaction(db, async (trx) => {
			await storedFilesRepository(trx).record(blob, 'application/octet-stream', now);
			const uploads = uploadsRepository(trx, scopeOf(actor));
			await uploads.removeForgotten(survey.id, new Date(now.getTime() - FORGOTTEN_AFTER_MS));
			return uploads.add({
				survey_id: survey.id,
				name,
				sha256: blob.sha256,
				size_bytes: blob.size_bytes,
				uploaded_by: actor.userId,
				created_at: now.toISOString(),
				from_archive: null
			});
		});
		return { id, name, ...blob };
	}

	async function discard(actor: Actor, surveyId: string, uploadId: string): Promise<void> {
		requirePermission(actor, 'capture.write');
		const uploads = uploadsRepository(db, scopeOf(actor));
		const [upload] = await uploads.ofSurvey(surveyId, [uploadId]);
		await uploads.remove([requireFound(upload, 'upload').id]);
	}

	/** Sorts received files into sets and queues the reading of each; what cannot be used is let go of at once. */
	async function intake(
		actor: Actor,
		surveyId: string,
		uploadIds: readonly string[]
	): Promise<IntakeOutcome> {
		requirePermission(actor, 'capture.write');
		const scope = scopeOf(actor);
		const survey = requireFound(await captureSurvey(db, scope, surveyId), 'survey');
		return withTransaction(db, async (trx) => {
			const uploads = uploadsRepository(trx, scope);
			const rows = await uploads.ofSurvey(survey.id, [...new Set(uploadIds)]);
			if (rows.length === 0)
				throw new AppError('invalid', 'None of these files is waiting any more. Choose them again.');
			const outcome: IntakeOutcome = { jobs: [], problems: [], duplicates: [] };
			const claimed = new Set<string>();
			const seen = new Map<string, string[]>();
			for (const set of groupRows(rows)) {
				const files = set.map((row) => row.name);
				const content = set
					.map((row) => row.sha256)
					.sort()
					.join();
				const incomplete = incompleteGroupSentence(files);
				const twin = await capturesRepository(trx, scope).withSameContent(
					survey.id,
					set.map((row) => row.sha256)
				);
				const sameNow = seen.get(content);
				if (incomplete) outcome.problems.push({ files, sentence: incomplete });
				else if (twin) outcome.duplicates.push({ captureId: twin.id, captureName: twin.name, files });
				else if (sameNow)
					outcome.problems.push({
						files,
						sentence: `${files.join(' and ')} has the same content as ${sameNow.join(' and ')}, which is read once.`
					});
				else {
					seen.set(content, files);
					for (const row of set) claimed.add(row.id);
					outcome.jobs.push(await queueReading(trx, actor, survey.id, set));
				}
			}
			await uploads.remove(rows.filter((row) => !claimed.has(row.id)).map((row) => row.id));
			await appendAudit(
				trx,
				actor,
				{
					action: 'capture.uploaded',
					subjectKind: 'survey',
					subjectId: survey.id,
					detail: { files: rows.map((row) => ({ name: row.name, sha256: row.sha256 })) }
				},
				clock()
			);
			return outcome;
		});
	}

	async function queueReading(trx: Db, actor: Actor, surveyId: string, set: UploadRow[]) {
		const name = captureName(set);
		const jobId = await jobs.enqueue(
			trx,
			recogniseCapture,
			{
				surveyId,
				uploadIds: set.map((row) => row.id),
				name,
				requestedBy: { userId: actor.userId, name: actor.name }
			},
			{ practiceId: actor.practiceId }
		);
		return { jobId, name, files: set.map((row) => row.name) };
	}

	return { receive, discard, intake };
}
