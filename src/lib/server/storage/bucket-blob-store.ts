import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { access, open, readFile, rm, stat, utimes } from 'node:fs/promises';
import { join } from 'node:path';
import { PassThrough, Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import type { CompletedPart } from '@aws-sdk/client-s3';
import type { BlobStore, StoredBlob } from './blob-store';
import { makeRoom } from './cache-room';
import { sha256OfFile } from './file-digest';
import { blobPlace, settle, takeIn } from './incoming-file';

export interface BucketSettings {
	name: string;
	region: string;
	/** Address of an S3-compatible service; null for the SDK's own. */
	endpoint: string | null;
	/** Null: the SDK's usual chain of credentials. */
	credentials: { accessKeyId: string; secretAccessKey: string } | null;
	/** Bucket in the path instead of the host name, as most services of one's own want it. */
	pathStyle: boolean;
	/** Leads every key, such as "sinewright/"; may be empty. */
	prefix: string;
}

/** Parts of a large object; S3 takes 5 MiB to 5 GiB and at most 10 000 of them. */
const PART_BYTES = 16 << 20;

interface BucketOptions {
	/** Local copies for reading in any order, cleared away from the oldest when there are too many. */
	cacheFolder: string;
	cacheLimit_bytes: number;
	partSize_bytes?: number;
}

/** Blobs as objects `prefix/ab/cdef…` of a bucket, with local copies of what is read in any order. */
export function createBucketBlobStore(settings: BucketSettings, options: BucketOptions): BlobStore {
	const { cacheFolder, cacheLimit_bytes, partSize_bytes = PART_BYTES } = options;
	let connected: ReturnType<typeof connect> | null = null;
	const bucket = () => (connected ??= connect(settings));
	const keyOf = (sha256: string) => ({
		Bucket: settings.name,
		Key: `${settings.prefix}${blobPlace(sha256)}`
	});
	const cachedPath = (sha256: string) => join(cacheFolder, blobPlace(sha256));

	/** Size of the stored object; null where there is none. */
	async function sizeOf(sha256: string): Promise<number | null> {
		try {
			const { client, sdk } = await bucket();
			return (await client.send(new sdk.HeadObjectCommand(keyOf(sha256)))).ContentLength ?? null;
		} catch (cause) {
			if (isMissing(cause)) return null;
			throw cause;
		}
	}

	/** Sends a local file unless it is there already, then keeps it as a local copy. */
	async function send(path: string, sha256: string, size_bytes: number): Promise<StoredBlob> {
		try {
			// The key is the content's hash: what is there with the same length is the same.
			if ((await sizeOf(sha256)) !== size_bytes)
				await (size_bytes <= partSize_bytes ? sendWhole(path, sha256) : sendParts(path, sha256, size_bytes));
			await settle(path, cachedPath(sha256));
		} catch (cause) {
			await rm(path, { force: true });
			throw cause;
		}
		await makeRoom(cacheFolder, cacheLimit_bytes);
		return { sha256, size_bytes };
	}

	async function sendWhole(path: string, sha256: string): Promise<void> {
		const { client, sdk } = await bucket();
		await client.send(
			new sdk.PutObjectCommand({
				...keyOf(sha256),
				Body: await readFile(path),
				ChecksumSHA256: Buffer.from(sha256, 'hex').toString('base64')
			})
		);
	}

	async function sendParts(path: string, sha256: string, size_bytes: number): Promise<void> {
		const { client, sdk } = await bucket();
		const key = keyOf(sha256);
		const { UploadId } = await client.send(
			new sdk.CreateMultipartUploadCommand({ ...key, ChecksumAlgorithm: 'SHA256' })
		);
		const file = await open(path, 'r');
		try {
			const parts: CompletedPart[] = [];
			for (let at = 0; at < size_bytes; at += partSize_bytes) {
				const body = Buffer.alloc(Math.min(partSize_bytes, size_bytes - at));
				await file.read(body, 0, body.length, at);
				const part = {
					PartNumber: parts.length + 1,
					ChecksumSHA256: createHash('sha256').update(body).digest('base64')
				};
				const sent = await client.send(new sdk.UploadPartCommand({ ...key, ...part, UploadId, Body: body }));
				parts.push({ ...part, ETag: sent.ETag });
			}
			await client.send(
				new sdk.CompleteMultipartUploadCommand({ ...key, UploadId, MultipartUpload: { Parts: parts } })
			);
		} catch (cause) {
			// Parts of an upload that nobody ends are kept, and paid for, until somebody does.
			await client.send(new sdk.AbortMultipartUploadCommand({ ...key, UploadId })).catch(() => undefined);
			throw cause;
		} finally {
			await file.close();
		}
	}

	async function bodyOf(sha256: string, range?: string): Promise<Readable> {
		const { client, sdk } = await bucket();
		const { Body } = await client.send(new sdk.GetObjectCommand({ ...keyOf(sha256), Range: range }));
		if (!(Body instanceof Readable)) throw new Error(`stored blob ${sha256} came without content`);
		return Body;
	}

	async function cachedOrNull(sha256: string): Promise<string | null> {
		const path = cachedPath(sha256);
		const isThere = await access(path).then(
			() => true,
			() => false
		);
		if (!isThere) return null;
		const now = new Date();
		await utimes(path, now, now);
		return path;
	}

	async function putStream(
		content: Readable,
		limit_bytes: number,
		onProgress?: (bytes: number) => void
	): Promise<StoredBlob> {
		const incoming = await takeIn(join(cacheFolder, 'incoming'), content, limit_bytes, onProgress);
		return send(incoming.path, incoming.sha256, incoming.size_bytes);
	}

	return {
		putStream,
		put: (content) => putStream(Readable.from([Buffer.from(content)]), Number.MAX_SAFE_INTEGER),
		async takeFile(path) {
			const { size: size_bytes } = await stat(path);
			return send(path, await sha256OfFile(path), size_bytes);
		},
		async read(sha256) {
			const cached = await cachedOrNull(sha256);
			const pieces: Buffer[] = [];
			for await (const piece of cached ? createReadStream(cached) : await bodyOf(sha256))
				pieces.push(piece as Buffer);
			const content = Buffer.concat(pieces);
			if (createHash('sha256').update(content).digest('hex') !== sha256)
				throw new Error(`stored blob ${sha256} no longer has its hash`);
			return content;
		},
		async readSlice(sha256, offset_bytes, length_bytes) {
			const cached = await cachedOrNull(sha256);
			if (cached) {
				const file = await open(cached, 'r');
				try {
					const buffer = Buffer.alloc(length_bytes);
					const { bytesRead } = await file.read(buffer, 0, length_bytes, offset_bytes);
					return buffer.subarray(0, bytesRead);
				} finally {
					await file.close();
				}
			}
			if (length_bytes === 0) return Buffer.alloc(0);
			try {
				const range = `bytes=${offset_bytes}-${offset_bytes + length_bytes - 1}`;
				const pieces: Buffer[] = [];
				for await (const piece of await bodyOf(sha256, range)) pieces.push(piece as Buffer);
				return Buffer.concat(pieces);
			} catch (cause) {
				// A range that begins behind the end: nothing is there, as in a file.
				if (statusOf(cause) === 416) return Buffer.alloc(0);
				throw cause;
			}
		},
		openRead(sha256) {
			const out = new PassThrough();
			void (async () => {
				const cached = await cachedOrNull(sha256);
				await pipeline(cached ? createReadStream(cached) : await bodyOf(sha256), out);
			})().catch((cause: unknown) => out.destroy(cause as Error));
			return out;
		},
		async localFile(sha256) {
			const cached = await cachedOrNull(sha256);
			if (cached) {
				if ((await sha256OfFile(cached)) === sha256) return cached;
				// A spoiled copy is fetched again.
				await rm(cached, { force: true });
			}
			const incoming = await takeIn(
				join(cacheFolder, 'incoming'),
				await bodyOf(sha256),
				Number.MAX_SAFE_INTEGER
			);
			if (incoming.sha256 !== sha256) {
				await rm(incoming.path, { force: true });
				throw new Error(`stored blob ${sha256} no longer has its hash`);
			}
			await settle(incoming.path, cachedPath(sha256));
			await makeRoom(cacheFolder, cacheLimit_bytes);
			return cachedPath(sha256);
		},
		async has(sha256) {
			return (await sizeOf(sha256)) !== null;
		}
	};
}

/** The SDK is large: it is loaded when the bucket is first asked, and not at all where a folder is used. */
async function connect({ region, endpoint, credentials, pathStyle }: BucketSettings) {
	const sdk = await import('@aws-sdk/client-s3');
	const client = new sdk.S3Client({
		region,
		forcePathStyle: pathStyle,
		// Not every service knows the checksums that the SDK adds by itself; ours are given with each request.
		requestChecksumCalculation: 'WHEN_REQUIRED',
		responseChecksumValidation: 'WHEN_REQUIRED',
		...(endpoint === null ? {} : { endpoint }),
		...(credentials === null ? {} : { credentials })
	});
	return { client, sdk };
}

function statusOf(cause: unknown): number | undefined {
	return (cause as { $metadata?: { httpStatusCode?: number } }).$metadata?.httpStatusCode;
}

function isMissing(cause: unknown): boolean {
	return statusOf(cause) === 404;
}
