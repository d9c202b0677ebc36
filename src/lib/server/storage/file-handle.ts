import { closeSync, openSync, readSync, statSync } from 'node:fs';
import type { CaptureHandle } from '../../recording/capture-handle';

/** A local file that readers can ask for pieces of. Close it when nothing reads from it any more. */
export interface FileHandle extends CaptureHandle {
	path: string;
	close(): void;
}

/**
 * Opens a local file for reading piece by piece. Reading blocks: the analysis has nothing else to do meanwhile.
 * name  as the person named it
 */
export function openFileHandle(name: string, path: string): FileHandle {
	const descriptor = openSync(path, 'r');
	return {
		name,
		path,
		size_bytes: statSync(path).size,
		read(offset_bytes, into) {
			let done = 0;
			while (done < into.length) {
				const count = readSync(descriptor, into, done, into.length - done, offset_bytes + done);
				if (count === 0) throw new Error(`${name} ends at byte ${offset_bytes + done}`);
				done += count;
			}
		},
		close: () => closeSync(descriptor)
	};
}
