import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { pipeline } from 'node:stream/promises';

/** Large pieces: hashing a capture should not wait for its events. */
const HASHED_AT_ONCE_BYTES = 1 << 20;

/** SHA-256 of a local file, lower-case hexadecimal, read piece by piece. */
export async function sha256OfFile(path: string): Promise<string> {
	const hash = createHash('sha256');
	await pipeline(createReadStream(path, { highWaterMark: HASHED_AT_ONCE_BYTES }), hash);
	return hash.digest('hex');
}
