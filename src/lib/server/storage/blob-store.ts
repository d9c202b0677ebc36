import type { Readable } from 'node:stream';

export interface StoredBlob {
	/** Lower-case hexadecimal SHA-256 of the content; also its address. */
	sha256: string;
	size_bytes: number;
}

/**
 * Content-addressed, write-once storage of uploaded originals, derived samples and issued PDFs.
 * A folder or a bucket, chosen by the settings: nothing outside this folder knows which.
 */
export interface BlobStore {
	/** Stores a stream whole or not at all. `limit_bytes` rejects with BlobTooLarge before the disk fills. */
	putStream(
		content: Readable,
		limit_bytes: number,
		onProgress?: (bytes: number) => void
	): Promise<StoredBlob>;
	put(content: Uint8Array): Promise<StoredBlob>;
	/** Takes a local file over: it is hashed, stored and no longer where it was. */
	takeFile(path: string): Promise<StoredBlob>;
	/** The whole content. Throws when the blob is missing or its content no longer has its hash. */
	read(sha256: string): Promise<Buffer>;
	/** `length_bytes` bytes from `offset_bytes`; shorter at the end of the blob. */
	readSlice(sha256: string, offset_bytes: number, length_bytes: number): Promise<Buffer>;
	openRead(sha256: string): Readable;
	/**
	 * Path of a local file with the content, for reading in any order; it stays for as long as the process runs.
	 * Throws when the blob is missing or its content no longer has its hash.
	 */
	localFile(sha256: string): Promise<string>;
	has(sha256: string): Promise<boolean>;
}

export class BlobTooLarge extends Error {
	constructor(readonly limit_bytes: number) {
		super(`The file is larger than ${limit_bytes} bytes.`);
		this.name = 'BlobTooLarge';
	}
}
