import type { Actor } from '../../access/access';
import { AppError, requireFound } from '../app-error';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import { newId } from '../db/ids';
import type { UploadSessionRow } from '../db/rows';
import { captureSurvey } from '../read-models/capture-list';
import { heldOriginal, type HeldOriginal } from '../read-models/held-originals';
import { storageUse } from '../read-models/storage-use';
import { scopeOf } from '../repositories/scope';
import { storedFilesRepository } from '../repositories/stored-files.repository';
import {
	removeUploadSession,
	staleUploadSessions,
	uploadSessionsRepository
} from '../repositories/upload-sessions.repository';
import { uploadsRepository } from '../repositories/uploads.repository';
import type { ServiceDeps } from '../service-deps';
import { createReceivingFolder } from '../storage/receiving-folder';
import { cleanFileName } from './intake/file-name';
import type { ReceivedUpload } from './uploads.service';

const SHA256 = /^[0-9a-f]{64}$/;
/** An interrupted upload is kept for a week after its last byte: long enough for a journey home. */
const KEPT_MS = 7 * 24 * 3600_000;

export interface AnnouncedFile {
	name: string;
	size_bytes: number;
	/** Computed by the sender; null where it could not tell. */
	sha256: string | null;
}

export interface InterruptedUpload {
	id: string;
	name: string;
	size_bytes: number;
	received_bytes: number;
	updatedAt: string;
}

/** What is known of a file before its bytes are sent. */
export interface KnownFile {
	/** The same content in a capture of this survey or, failing that, elsewhere in the practice. */
	held: HeldOriginal | null;
	/** A session of the same person and survey that got part of it. */
	session: { id: string; received_bytes: number } | null;
}

function megabytes(bytes: number): string {
	return `${(bytes / 1024 / 1024).toFixed(bytes < 10 * 1024 * 1024 ? 1 : 0)} MB`;
}

function tooLarge(name: string, limit_bytes: number): AppError {
	return new AppError(
		'invalid',
		`${name} is larger than this installation takes (at most ${Math.floor(limit_bytes / 1024 / 1024)} MB). Export a shorter stretch, or ask for a higher limit.`
	);
}

/**
 * Files that arrive in pieces: announced, grown in the receiving folder, checked against the hash that the sender
 * computed, moved into blob storage. Sessions are rows and bytes are files, so both outlive a restart.
 */
export function createReceivingService(deps: ServiceDeps) {
	const { db, blobs, config, clock } = deps;
	const folder = createReceivingFolder(config.dataDir);
	/** One web process serves an installation, so arrivals under way can be remembered in it. */
	const arriving = new Map<string, Promise<ReceivedUpload>>();

	async function surveyOf(actor: Actor, surveyId: string): Promise<string> {
		requirePermission(actor, 'capture.write');
		return requireFound(await captureSurvey(db, scopeOf(actor), surveyId), 'survey').id;
	}

	/** Refuses what would take the practice over its quota; a session counts itself out. */
	async function requireRoom(
		reader: Db,
		actor: Actor,
		file: { name: string; size_bytes: number },
		sessionId: string | null = null
	): Promise<void> {
		const use = await storageUse(reader, config, actor.practiceId, sessionId);
		if (use.quota_bytes === null) return;
		const room_bytes = use.quota_bytes - use.kept_bytes - use.expected_bytes;
		if (file.size_bytes > room_bytes)
			throw new AppError(
				'invalid',
				`${file.name} (${megabytes(file.size_bytes)}) does not fit: ${megabytes(Math.max(0, room_bytes))} of the ${megabytes(use.quota_bytes)} that this practice may keep are free. Remove captures that are not needed any more, or ask for more room.`
			);
	}

	/** The session with what has arrived of it. Only the person who began it may go on. */
	async function session(actor: Actor, surveyId: string, sessionId: string): Promise<UploadSessionRow> {
		requirePermission(actor, 'capture.write');
		const row = await uploadSessionsRepository(db, scopeOf(actor)).byId(surveyId, sessionId);
		return requireFound(row?.uploaded_by === actor.userId ? row : null, 'upload');
	}

	/** What is known of a file by its content, so that nobody sends a gigabyte twice. */
	async function lookUp(
		actor: Actor,
		surveyId: string,
		file: { sha256: string; size_bytes: number }
	): Promise<KnownFile> {
		const survey = await surveyOf(actor, surveyId);
		const held = await heldOriginal(db, scopeOf(actor), survey, file.sha256);
		const waiting = await uploadSessionsRepository(db, scopeOf(actor)).unfinished(survey, actor.userId);
		const same = waiting.find(
			(row) => row.expected_sha256 === file.sha256 && row.size_bytes === file.size_bytes
		);
		return {
			held,
			session: same ? { id: same.id, received_bytes: await folder.received_bytes(same.id) } : null
		};
	}

	/** Begins a session; refuses with a sentence what could not be kept in the end. */
	async function announce(actor: Actor, surveyId: string, file: AnnouncedFile): Promise<string> {
		const survey = await surveyOf(actor, surveyId);
		const name = cleanFileName(file.name);
		if (file.size_bytes === 0)
			throw new AppError('invalid', `${name} is empty. Copy it from the recorder again.`);
		if (file.size_bytes > config.uploadLimit_bytes) throw tooLarge(name, config.uploadLimit_bytes);
		if (file.sha256 !== null && !SHA256.test(file.sha256))
			throw new AppError('invalid', 'The SHA-256 of a file is 64 hexadecimal digits in lower case.');
		await requireRoom(db, actor, { name, size_bytes: file.size_bytes });
		const id = newId();
		const at = clock().toISOString();
		await uploadSessionsRepository(db, scopeOf(actor)).add({
			id,
			survey_id: survey,
			name,
			size_bytes: file.size_bytes,
			received_bytes: 0,
			expected_sha256: file.sha256,
			status: 'receiving',
			problem: null,
			upload_id: null,
			uploaded_by: actor.userId,
			created_at: at,
			updated_at: at
		});
		return id;
	}

	async function noteProgress(actor: Actor, sessionId: string): Promise<void> {
		await uploadSessionsRepository(db, scopeOf(actor)).update(sessionId, {
			received_bytes: await folder.received_bytes(sessionId),
			updated_at: clock().toISOString()
		});
	}

	async function refuse(actor: Actor, row: UploadSessionRow, sentence: string): Promise<never> {
		await folder.remove(row.id);
		await uploadSessionsRepository(db, scopeOf(actor)).update(row.id, {
			status: 'failed',
			problem: sentence,
			updated_at: clock().toISOString()
		});
		throw new AppError('invalid', sentence);
	}

	/** Into blob storage and the survey; the quota is looked at again, for others may have arrived meanwhile. A file without room waits. */
	async function settle(actor: Actor, row: UploadSessionRow): Promise<ReceivedUpload> {
		const received_bytes = await folder.received_bytes(row.id);
		if (received_bytes !== row.size_bytes)
			throw new AppError(
				'conflict',
				`${row.name} has not arrived whole: ${received_bytes} of ${row.size_bytes} bytes are here. Send the rest first.`
			);
		const sha256 = await folder.sha256(row.id);
		if (row.expected_sha256 !== null && sha256 !== row.expected_sha256)
			return refuse(
				actor,
				row,
				`${row.name} is not the file that was chosen: its bytes changed on the way or while it was sent. Nothing of it was kept; choose it again.`
			);
		await requireRoom(db, actor, row, row.id);
		const blob = await blobs.takeFile(folder.pathOf(row.id));
		const now = clock();
		const uploadId = await withTransaction(db, async (trx) => {
			await requireRoom(trx, actor, row, row.id);
			await storedFilesRepository(trx).record(blob, 'application/octet-stream', now);
			const id = await uploadsRepository(trx, scopeOf(actor)).add({
				survey_id: row.survey_id,
				name: row.name,
				sha256: blob.sha256,
				size_bytes: blob.size_bytes,
				uploaded_by: actor.userId,
				created_at: now.toISOString(),
				from_archive: null
			});
			await uploadSessionsRepository(trx, scopeOf(actor)).update(row.id, {
				status: 'arrived',
				received_bytes,
				upload_id: id,
				updated_at: now.toISOString()
			});
			return id;
		});
		await folder.remove(row.id);
		return { id: uploadId, name: row.name, ...blob };
	}

	/** Checks a file that has arrived whole and keeps it. Asked again, it answers the same. */
	async function arrive(actor: Actor, surveyId: string, sessionId: string): Promise<ReceivedUpload> {
		const row = await session(actor, surveyId, sessionId);
		if (row.status === 'failed')
			throw new AppError('invalid', row.problem ?? `${row.name} was not kept. Choose it again.`);
		if (row.status === 'arrived') {
			const ids = [row.upload_id ?? ''];
			const [upload] = await uploadsRepository(db, scopeOf(actor)).ofSurvey(surveyId, ids);
			const { id, name, sha256, size_bytes } = requireFound(upload, 'upload');
			return { id, name, sha256, size_bytes };
		}
		const underWay = arriving.get(row.id);
		if (underWay) return underWay;
		const work = settle(actor, row).finally(() => arriving.delete(row.id));
		arriving.set(row.id, work);
		return work;
	}

	/** Files of this person that broke off on their way into the survey. */
	async function interrupted(actor: Actor, surveyId: string): Promise<InterruptedUpload[]> {
		const survey = await surveyOf(actor, surveyId);
		const rows = await uploadSessionsRepository(db, scopeOf(actor)).unfinished(survey, actor.userId);
		return Promise.all(
			rows.map(async ({ id, name, size_bytes, updated_at }) => ({
				id,
				name,
				size_bytes,
				received_bytes: await folder.received_bytes(id),
				updatedAt: updated_at
			}))
		);
	}

	async function discard(actor: Actor, surveyId: string, sessionId: string): Promise<void> {
		const row = await session(actor, surveyId, sessionId);
		await folder.remove(row.id);
		await uploadSessionsRepository(db, scopeOf(actor)).remove(row.id);
	}

	/** Takes a file whose content the practice holds already, without its bytes being sent again. */
	async function takeHeld(
		actor: Actor,
		surveyId: string,
		file: { name: string; sha256: string }
	): Promise<ReceivedUpload> {
		const survey = await surveyOf(actor, surveyId);
		const name = cleanFileName(file.name);
		const held = requireFound(await heldOriginal(db, scopeOf(actor), survey, file.sha256), 'file');
		const id = await uploadsRepository(db, scopeOf(actor)).add({
			survey_id: survey,
			name,
			sha256: file.sha256,
			size_bytes: held.size_bytes,
			uploaded_by: actor.userId,
			created_at: clock().toISOString(),
			from_archive: null
		});
		return { id, name, sha256: file.sha256, size_bytes: held.size_bytes };
	}

	/** Clears away what nobody has gone on with for a week, and bytes that no session knows. */
	async function sweep(): Promise<{ sessions: number; files: number }> {
		const stale = await staleUploadSessions(db, new Date(clock().getTime() - KEPT_MS));
		for (const row of stale) {
			await folder.remove(row.id);
			await removeUploadSession(db, row.id);
		}
		const known = new Set(await db('upload_sessions').where({ status: 'receiving' }).pluck('id'));
		const strays = (await folder.list()).filter((id) => !known.has(id));
		for (const id of strays) await folder.remove(id);
		return { sessions: stale.length, files: strays.length };
	}

	return {
		lookUp,
		announce,
		session,
		noteProgress,
		arrive,
		interrupted,
		discard,
		takeHeld,
		sweep,
		folder: folder.root
	};
}
