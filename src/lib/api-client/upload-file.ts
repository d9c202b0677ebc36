import { DetailedError, Upload } from 'tus-js-client';
import { ask } from './ask';
import { problemSentence, RequestProblem } from './request-problem';

/** Small enough that a cut connection costs seconds, large enough that asking costs nothing. */
const PIECE_BYTES = 8 << 20;
/** A laptop that changes from one network to another is back within a minute and a half. */
const RETRY_AFTER_MS = [500, 1000, 3000, 10_000, 30_000, 45_000];

export interface UploadedFile {
	id: string;
	name: string;
	size_bytes: number;
	sha256: string;
}

/** A capture of the practice that was made from the same content. */
export interface HeldOriginal {
	captureId: string;
	captureName: string;
	surveyId: string;
	surveyNumber: string;
	size_bytes: number;
	/** True when it lies in the survey that the file is meant for. */
	here: boolean;
}

export interface KnownFile {
	held: HeldOriginal | null;
	session: { id: string; received_bytes: number } | null;
}

export interface InterruptedUpload {
	id: string;
	name: string;
	size_bytes: number;
	received_bytes: number;
	updatedAt: string;
}

const sessionsPath = (surveyId: string) => `/api/v1/surveys/${surveyId}/upload-sessions`;

function json(method: 'POST' | 'PUT', body: unknown): RequestInit {
	return { method, headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) };
}

/** What the server knows of a content before it is sent. */
export async function lookUpFile(
	surveyId: string,
	file: { sha256: string; size_bytes: number },
	signal: AbortSignal
): Promise<KnownFile> {
	const response = await ask(`/api/v1/surveys/${surveyId}/uploads/known`, { ...json('POST', file), signal });
	return response.json();
}

/** Takes a file that the practice holds already, without sending it. */
export async function takeHeldFile(
	surveyId: string,
	file: { sha256: string; name: string }
): Promise<UploadedFile> {
	return (await ask(`/api/v1/surveys/${surveyId}/uploads/known`, json('PUT', file))).json();
}

export async function interruptedUploads(surveyId: string): Promise<InterruptedUpload[]> {
	return (await ask(sessionsPath(surveyId))).json();
}

export async function discardInterrupted(surveyId: string, sessionId: string): Promise<void> {
	await ask(`${sessionsPath(surveyId)}/${sessionId}`, { method: 'DELETE' });
}

function problemOf(file: File, cause: Error): Error {
	if (!(cause instanceof DetailedError)) return cause;
	const response = cause.originalResponse;
	return new RequestProblem(
		response
			? problemSentence(response.getStatus(), response.getBody())
			: `The connection was lost while ${file.name} was sent. What arrived is kept: go on when the connection is back.`
	);
}

/**
 * Sends one file in pieces (tus 1.0), going on with `sessionId` where one is given, and has it checked and kept.
 * Aborting `signal` stops the sending; what has arrived stays on the server for going on.
 * Rejects with RequestProblem, or with an AbortError when `signal` is aborted.
 */
export async function uploadFile(
	surveyId: string,
	file: File,
	options: {
		sha256: string;
		sessionId: string | null;
		signal: AbortSignal;
		onProgress: (sent_bytes: number) => void;
	}
): Promise<UploadedFile> {
	options.signal.throwIfAborted();
	const endpoint = sessionsPath(surveyId);
	const url = await new Promise<string>((resolve, reject) => {
		const upload = new Upload(file, {
			endpoint,
			uploadUrl: options.sessionId === null ? null : `${endpoint}/${options.sessionId}`,
			chunkSize: PIECE_BYTES,
			retryDelays: RETRY_AFTER_MS,
			metadata: { name: file.name, sha256: options.sha256 },
			// The server knows by the hash what to go on with; nothing is kept in the browser.
			storeFingerprintForResuming: false,
			headers: { accept: 'application/json' },
			onProgress: options.onProgress,
			onSuccess: () => end(() => resolve(upload.url ?? '')),
			onError: (cause) => end(() => reject(problemOf(file, cause)))
		});
		const end = (settle: () => void) => {
			options.signal.removeEventListener('abort', stop);
			settle();
		};
		const stop = () => {
			void upload.abort(false);
			reject(new DOMException('stopped', 'AbortError'));
		};
		options.signal.addEventListener('abort', stop, { once: true });
		upload.start();
	});
	return (await ask(`${new URL(url, location.href).pathname}/arrival`, { method: 'POST' })).json();
}
