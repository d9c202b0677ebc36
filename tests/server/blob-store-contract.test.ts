import { createHash } from 'node:crypto';
import {
	existsSync,
	mkdtempSync,
	readdirSync,
	readFileSync,
	statSync,
	utimesSync,
	writeFileSync
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Readable } from 'node:stream';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { BlobTooLarge, type BlobStore } from '$lib/server/storage/blob-store';
import { createBucketBlobStore } from '$lib/server/storage/bucket-blob-store';
import { createDiskBlobStore } from '$lib/server/storage/disk-blob-store';
import { startFakeBucket, type FakeBucket } from '../support/fake-bucket';

const PART_BYTES = 1 << 16;
const sha256 = (content: Uint8Array) => createHash('sha256').update(content).digest('hex');
/** Bytes that repeat nowhere near; larger than one part of a multipart upload. */
const content = Buffer.from(
	Array.from({ length: 3 * PART_BYTES + 1234 }, (_, i) => (i * 7919 + (i >> 8)) % 256)
);
const settings = (bucket: FakeBucket, accessKeyId = 'key-of-the-test') => ({
	name: 'captures',
	region: 'eu-test-1',
	endpoint: bucket.endpoint,
	credentials: { accessKeyId, secretAccessKey: 'secret-of-the-test' },
	pathStyle: true,
	prefix: 'sinewright/'
});
const folder = () => mkdtempSync(join(tmpdir(), 'sinewright-store-'));
const filesBelow = (path: string) =>
	readdirSync(path, { recursive: true, withFileTypes: true }).filter((entry) => entry.isFile()).length;

interface Opened {
	store: BlobStore;
	/** Alters a byte of what is stored. */
	spoil(hash: string): void;
	close(): Promise<void>;
}

const IMPLEMENTATIONS: [string, () => Promise<Opened>][] = [
	[
		'a folder',
		async () => {
			const root = folder();
			return {
				store: createDiskBlobStore(root),
				spoil(hash) {
					const path = join(root, hash.slice(0, 2), hash.slice(2));
					const bytes = readFileSync(path);
					bytes[5]! ^= 1;
					writeFileSync(path, bytes);
				},
				close: async () => undefined
			};
		}
	],
	[
		'a bucket with local copies',
		async () => {
			const bucket = await startFakeBucket('captures', 'key-of-the-test');
			const cacheFolder = folder();
			const store = createBucketBlobStore(settings(bucket), {
				cacheFolder,
				cacheLimit_bytes: 1e9,
				partSize_bytes: PART_BYTES
			});
			return {
				store,
				spoil(hash) {
					bucket.objects.get(`sinewright/${hash.slice(0, 2)}/${hash.slice(2)}`)![5]! ^= 1;
					writeFileSync(join(cacheFolder, hash.slice(0, 2), hash.slice(2)), 'spoiled');
				},
				close: bucket.close
			};
		}
	],
	[
		'a bucket that another machine filled',
		async () => {
			const bucket = await startFakeBucket('captures', 'key-of-the-test');
			const options = { cacheLimit_bytes: 1e9, partSize_bytes: PART_BYTES };
			const writer = createBucketBlobStore(settings(bucket), { ...options, cacheFolder: folder() });
			const reader = createBucketBlobStore(settings(bucket), { ...options, cacheFolder: folder() });
			return {
				store: { ...reader, put: writer.put, putStream: writer.putStream, takeFile: writer.takeFile },
				spoil: (hash) =>
					void (bucket.objects.get(`sinewright/${hash.slice(0, 2)}/${hash.slice(2)}`)![5]! ^= 1),
				close: bucket.close
			};
		}
	]
];

describe.each(IMPLEMENTATIONS)('storage in %s', (_name, open) => {
	let opened: Opened;
	let store: BlobStore;
	beforeEach(async () => {
		opened = await open();
		store = opened.store;
	});
	afterEach(() => opened.close());

	it('gives back what was put, by its hash, whole, in slices and as a file', async () => {
		const seen: number[] = [];
		const stored = await store.putStream(
			Readable.from([content.subarray(0, 1000), content.subarray(1000)]),
			1e9,
			(bytes) => seen.push(bytes)
		);
		expect(stored).toEqual({ sha256: sha256(content), size_bytes: content.length });
		expect(seen.at(-1)).toBe(content.length);
		expect((await store.read(stored.sha256)).equals(content)).toBe(true);
		expect(await store.readSlice(stored.sha256, 100, 7)).toEqual(content.subarray(100, 107));
		const end = await store.readSlice(stored.sha256, content.length - 3, 10);
		expect(end).toEqual(content.subarray(-3));
		expect(await store.readSlice(stored.sha256, content.length + 10, 10)).toHaveLength(0);
		const pieces: Buffer[] = [];
		for await (const piece of store.openRead(stored.sha256)) pieces.push(piece as Buffer);
		expect(Buffer.concat(pieces).equals(content)).toBe(true);
		expect(readFileSync(await store.localFile(stored.sha256)).equals(content)).toBe(true);
		expect(await store.has(stored.sha256)).toBe(true);
		expect(await store.has(sha256(Buffer.from('nobody put this')))).toBe(false);
	});

	it('takes the same content twice, and empty and small content', async () => {
		const once = await store.put(content);
		expect(await store.put(content)).toEqual(once);
		for (const small of [Buffer.alloc(0), Buffer.from([7])]) {
			const { sha256: hash, size_bytes } = await store.put(small);
			expect(size_bytes).toBe(small.length);
			expect((await store.read(hash)).equals(small)).toBe(true);
		}
	});

	it('takes a file over, and it is gone from where it was', async () => {
		const path = join(folder(), 'received');
		writeFileSync(path, content);
		const { sha256: hash } = await store.takeFile(path);
		expect(hash).toBe(sha256(content));
		expect(existsSync(path)).toBe(false);
		expect((await store.read(hash)).equals(content)).toBe(true);
	});

	it('stores nothing of what is too large or breaks off', async () => {
		await expect(store.putStream(Readable.from([content]), 1000)).rejects.toThrow(BlobTooLarge);
		const broken = Readable.from(
			(async function* () {
				yield content;
				throw new Error('connection lost');
			})()
		);
		await expect(store.putStream(broken, 1e9)).rejects.toThrow('connection lost');
		expect(await store.has(sha256(content))).toBe(false);
	});

	it('does not hand out content that no longer has its hash', async () => {
		const { sha256: hash } = await store.put(content);
		opened.spoil(hash);
		await expect(store.read(hash)).rejects.toThrow('no longer has its hash');
		await expect(store.localFile(hash)).rejects.toThrow('no longer has its hash');
	});

	it('refuses what is no hash, and says that a blob is missing', async () => {
		await expect(store.read('../../etc/passwd')).rejects.toThrow('not a SHA-256');
		await expect(store.read(sha256(Buffer.from('missing')))).rejects.toThrow();
		await expect(store.localFile(sha256(Buffer.from('missing')))).rejects.toThrow();
		const missing = store.openRead(sha256(Buffer.from('missing')));
		await expect(missing.toArray()).rejects.toThrow();
	});
});

describe('a bucket', () => {
	let bucket: FakeBucket;
	let cacheFolder: string;
	let store: BlobStore;
	beforeEach(async () => {
		bucket = await startFakeBucket('captures', 'key-of-the-test');
		cacheFolder = folder();
		store = createBucketBlobStore(settings(bucket), {
			cacheFolder,
			cacheLimit_bytes: content.length + 10,
			partSize_bytes: PART_BYTES
		});
	});
	afterEach(() => bucket.close());

	it('gets large content in parts, each with its checksum, small content at once, and nothing twice', async () => {
		await store.put(content);
		const calls = bucket.requests.map((request) => request.call);
		expect(calls).toEqual(['HEAD', 'POST uploads', ...Array(4).fill('PUT part'), 'POST upload']);
		await store.put(content);
		await store.put(Buffer.from('small'));
		expect(bucket.requests.map((request) => request.call).slice(7)).toEqual(['HEAD', 'HEAD', 'PUT']);
		expect(bucket.openUploads()).toBe(0);
	});

	it('ends a multipart upload that failed, keeps nothing of it, and takes it at the next try', async () => {
		bucket.failNext('PUT part', 403);
		await expect(store.put(content)).rejects.toThrow();
		expect(bucket.openUploads()).toBe(0);
		expect(bucket.objects.size).toBe(0);
		expect(filesBelow(cacheFolder)).toBe(0);
		await store.put(content);
		expect(bucket.objects.size).toBe(1);
	});

	it('goes on when the service was busy for a moment', async () => {
		bucket.failNext('PUT', 503);
		await store.put(Buffer.from('small'));
		expect(bucket.objects.size).toBe(1);
	});

	it('is not opened with another key', async () => {
		const stranger = createBucketBlobStore(settings(bucket, 'somebody-else'), {
			cacheFolder: folder(),
			cacheLimit_bytes: 1e9
		});
		await expect(stranger.put(content)).rejects.toThrow();
		expect(bucket.objects.size).toBe(0);
	});

	it('clears copies away when there are too many, the longest unused first, and fetches them again', async () => {
		const { sha256: first } = await store.put(content);
		const copy = join(cacheFolder, first.slice(0, 2), first.slice(2));
		const longAgo = new Date(Date.now() - 24 * 3600_000);
		utimesSync(copy, longAgo, longAgo);
		await store.put(Buffer.from('something else, later'));
		expect(existsSync(copy)).toBe(false);
		expect((await store.read(first)).equals(content)).toBe(true);
		expect(statSync(await store.localFile(first)).size).toBe(content.length);
	});
});
