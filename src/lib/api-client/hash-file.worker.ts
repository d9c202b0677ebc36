import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';

/** What the worker says: bytes hashed so far, the hash at the end, or that the file could not be read. */
export type HashMessage = { hashed_bytes: number } | { sha256: string } | { unreadable: true };

const READ_AT_ONCE_BYTES = 4 << 20;

/** Hashes the file that it is sent, piece by piece, off the page's own thread. */
self.addEventListener('message', (event: MessageEvent<File>) => {
	void hashFile(event.data);
});

async function hashFile(file: File): Promise<void> {
	const say = (message: HashMessage) => self.postMessage(message);
	try {
		const hash = sha256.create();
		for (let at = 0; at < file.size; at += READ_AT_ONCE_BYTES) {
			const piece = await file.slice(at, at + READ_AT_ONCE_BYTES).arrayBuffer();
			hash.update(new Uint8Array(piece));
			say({ hashed_bytes: Math.min(at + READ_AT_ONCE_BYTES, file.size) });
		}
		say({ sha256: bytesToHex(hash.digest()) });
	} catch {
		say({ unreadable: true });
	}
}
