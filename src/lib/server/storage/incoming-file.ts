import { createHash, randomUUID } from 'node:crypto';
import { createWriteStream } from 'node:fs';
import { mkdir, open, rename, rm } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { Transform, type Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { BlobTooLarge, type StoredBlob } from './blob-store';

const SHA256 = /^[0-9a-f]{64}$/;

/** "ab/cdef…": where a blob lies below its root, the same in a folder and in a bucket. */
export function blobPlace(sha256: string): string {
	if (!SHA256.test(sha256)) throw new Error('not a SHA-256 in lower-case hexadecimal');
	return `${sha256.slice(0, 2)}/${sha256.slice(2)}`;
}

/** A local file that has arrived whole and knows its hash, but is not in its place yet. */
export interface IncomingFile extends StoredBlob {
	path: string;
}

/** Writes a stream into a file of its own in `folder`, hashing it on the way; nothing stays when it breaks off. */
export async function takeIn(
	folder: string,
	content: Readable,
	limit_bytes: number,
	onProgress?: (bytes: number) => void
): Promise<IncomingFile> {
	await mkdir(folder, { recursive: true });
	const path = join(folder, randomUUID());
	const hash = createHash('sha256');
	let size_bytes = 0;
	const meter = new Transform({
		transform(chunk: Buffer, _encoding, done) {
			size_bytes += chunk.length;
			if (size_bytes > limit_bytes) return done(new BlobTooLarge(limit_bytes));
			hash.update(chunk);
			onProgress?.(size_bytes);
			done(null, chunk);
		}
	});
	try {
		await pipeline(content, meter, createWriteStream(path, { mode: 0o600 }));
		return { path, sha256: hash.digest('hex'), size_bytes };
	} catch (cause) {
		await rm(path, { force: true });
		throw cause;
	}
}

/** Flushes a file and moves it into its place; same content, same name, so a twin is simply written over. */
export async function settle(path: string, target: string): Promise<void> {
	const handle = await open(path, 'r');
	await handle.sync();
	await handle.close();
	await mkdir(dirname(target), { recursive: true });
	await rename(path, target);
}
