import { createHash, randomUUID } from 'node:crypto';
import { createReadStream, createWriteStream } from 'node:fs';
import { access, mkdir, open, readFile, rename, rm } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { Readable, Transform } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { BlobTooLarge, type BlobStore, type StoredBlob } from './blob-store';

/** Large pieces: hashing a capture should not wait for its events. */
const HASHED_AT_ONCE_BYTES = 1 << 20;
const SHA256 = /^[0-9a-f]{64}$/;

/** Blobs as files `root/ab/cdef…`, named by their hash; written aside, flushed, then renamed into place. */
export function createDiskBlobStore(root: string): BlobStore {
	const pathOf = (sha256: string): string => {
		if (!SHA256.test(sha256)) throw new Error('not a SHA-256 in lower-case hexadecimal');
		return join(root, sha256.slice(0, 2), sha256.slice(2));
	};

	async function settle(incoming: string, sha256: string): Promise<void> {
		const handle = await open(incoming, 'r');
		await handle.sync();
		await handle.close();
		const target = pathOf(sha256);
		await mkdir(dirname(target), { recursive: true });
		// Same content, same name: an existing blob is simply written over by its twin.
		await rename(incoming, target);
	}

	async function putStream(
		content: Readable,
		limit_bytes: number,
		onProgress?: (bytes: number) => void
	): Promise<StoredBlob> {
		await mkdir(join(root, 'incoming'), { recursive: true });
		const incoming = join(root, 'incoming', randomUUID());
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
			await pipeline(content, meter, createWriteStream(incoming, { mode: 0o600 }));
			const sha256 = hash.digest('hex');
			await settle(incoming, sha256);
			return { sha256, size_bytes };
		} catch (cause) {
			await rm(incoming, { force: true });
			throw cause;
		}
	}

	return {
		putStream,
		put: (content) => putStream(Readable.from([Buffer.from(content)]), Number.MAX_SAFE_INTEGER),
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
			const hash = createHash('sha256');
			await pipeline(createReadStream(pathOf(sha256), { highWaterMark: HASHED_AT_ONCE_BYTES }), hash);
			if (hash.digest('hex') !== sha256) throw new Error(`stored blob ${sha256} no longer has its hash`);
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
