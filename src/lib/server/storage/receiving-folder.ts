import { mkdir, readdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { sha256OfFile } from './file-digest';

/** The folder in which files grow that arrive in pieces, each under the id of its session. */
export interface ReceivingFolder {
	root: string;
	pathOf(sessionId: string): string;
	/** Bytes there so far; 0 for a session without a file. */
	received_bytes(sessionId: string): Promise<number>;
	/** SHA-256 of what is there, read piece by piece. */
	sha256(sessionId: string): Promise<string>;
	remove(sessionId: string): Promise<void>;
	/** Ids of the files that lie there, whether a session knows them or not. */
	list(): Promise<string[]>;
}

export function createReceivingFolder(dataDir: string): ReceivingFolder {
	const root = join(dataDir, 'receiving');
	const pathOf = (sessionId: string) => join(root, sessionId);
	return {
		root,
		pathOf,
		received_bytes: (sessionId) =>
			stat(pathOf(sessionId)).then(
				(found) => found.size,
				() => 0
			),
		sha256: (sessionId) => sha256OfFile(pathOf(sessionId)),
		remove: (sessionId) => rm(pathOf(sessionId), { force: true }),
		async list() {
			await mkdir(root, { recursive: true });
			return readdir(root);
		}
	};
}
