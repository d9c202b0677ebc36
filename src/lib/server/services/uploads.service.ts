import { Readable } from 'node:stream';
import type { ReadableStream as WebReadableStream } from 'node:stream/web';
import type { Actor } from '../../access/access';
import { AppError, requireFound } from '../app-error';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction } from '../db/database';
import { captureSurvey } from '../read-models/capture-list';
import { scopeOf } from '../repositories/scope';
import { storedFilesRepository } from '../repositories/stored-files.repository';
import { uploadsRepository } from '../repositories/uploads.repository';
import type { ServiceDeps } from '../service-deps';
import { BlobTooLarge } from '../storage/blob-store';
import { cleanFileName } from './intake/file-name';
import { sortIntoCaptures, type IntakeOutcome } from './intake/sort-into-captures';

const FORGOTTEN_AFTER_MS = 24 * 3600_000;

export interface ReceivedUpload {
	id: string;
	name: string;
	size_bytes: number;
	sha256: string;
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

/** Files on their way to becoming captures: received, grouped into sets, handed to the worker. */
export function createUploadsService(deps: ServiceDeps) {
	const { db, blobs, config, clock } = deps;

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
			const outcome = await sortIntoCaptures(trx, deps, actor, survey.id, rows);
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

	return { receive, discard, intake };
}
