import { FileStore } from '@tus/file-store';
import { MemoryLocker, Server, Upload } from '@tus/server';
import type { Actor } from '../../access/access';
import { AppError } from '../app-error';
import { container, type Container } from '../container';

/** One web process serves an installation, so locks in its memory are enough. */
const locker = new MemoryLocker();

/** An expected failure in the protocol's answer, with its sentence as every other route gives it. */
function refusal(cause: unknown): unknown {
	return cause instanceof AppError
		? { status_code: cause.status, body: JSON.stringify({ message: cause.message }) }
		: cause;
}

/** The protocol's own facts of a file come from its session's row: there is no second record to go astray. */
function storeFor({ services }: Container, actor: Actor, surveyId: string): FileStore {
	return new FileStore({
		directory: services.receiving.folder,
		configstore: {
			async get(id: string) {
				const row = await services.receiving.session(actor, surveyId, id);
				return new Upload({ id, size: row.size_bytes, offset: 0, creation_date: row.created_at });
			},
			set: async () => undefined,
			delete: async () => undefined
		}
	});
}

/**
 * Answers a request of the tus 1.0 protocol (creation, offset, piece) for one person and survey. Whoever calls this
 * has checked the permission; sessions of others are not found.
 */
export async function answerResumableUpload(
	request: Request,
	actor: Actor,
	surveyId: string
): Promise<Response> {
	const { services, config } = container();
	const server = new Server({
		path: `/api/v1/surveys/${surveyId}/upload-sessions`,
		datastore: storeFor(container(), actor, surveyId),
		locker,
		relativeLocation: true,
		allowedOrigins: [config.origin],
		namingFunction: (asked, metadata) =>
			services.receiving
				.announce(actor, surveyId, {
					name: metadata?.['name'] ?? '',
					size_bytes: Number(asked.headers.get('upload-length')),
					sha256: metadata?.['sha256'] ?? null
				})
				.catch((cause: unknown) => {
					throw refusal(cause);
				})
	});
	return server.handleWeb(request);
}
