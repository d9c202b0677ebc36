import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { access, open, readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import type { BlobStore, StoredBlob } from './blob-store';
import { sha256OfFile } from './file-digest';
import { blobPlace, settle, takeIn } from './incoming-file';

/** Blobs as files `root/ab/cdef…`, named by their hash; written aside, flushed, then renamed into place. */
export function createDiskBlobStore(root: string): BlobStore {
	const pathOf = (sha256: string): string => join(root, blobPlace(sha256));

	async function putStream(
		content: Readable,
		limit_bytes: number,
		onProgress?: (bytes: number) => void
	): Promise<StoredBlob> {
		const { path, sha256, size_bytes } = await takeIn(
			join(root, 'incoming'),
			content,
			limit_bytes,
			onProgress
		);
		await settle(path, pathOf(sha256));
		return { sha256, size_bytes };
	}

	return {
		putStream,
		put: (content) => putStream(Readable.from([Buffer.from(content)]), Number.MAX_SAFE_INTEGER),
		async takeFile(path) {
			const { size: size_bytes } = await stat(path);
			const sha256 = await sha256OfFile(path);
			await settle(path, pathOf(sha256));
			return { sha256, size_bytes };
		},
		async read(sha256) {
			const content = await readFile(pathOf(sha256));
			if (createHash('sha256').update(content).digest('hex') !== sha256)
				throw new Error(`stored blob ${sha256} no longer has its hash`);
			return content;
		},
		async readSlice(sha256, offset_bytes, length_bytes) {
			const handle = await open(pathOf(sha256), 'r');
			try {
				const buffer = Buffer.alloc(length_bytes);
				const { bytesRead } = await handle.read(buffer, 0, length_bytes, offset_bytes);
				return buffer.subarray(0, bytesRead);
			} finally {
				await handle.close();
			}
		},
		openRead: (sha256) => createReadStream(pathOf(sha256)),
		async localFile(sha256) {
			if ((await sha256OfFile(pathOf(sha256))) !== sha256)
				throw new Error(`stored blob ${sha256} no longer has its hash`);
			return pathOf(sha256);
		},
		async has(sha256) {
			return access(pathOf(sha256)).then(
				() => true,
				() => false
			);
		}
	};
}
