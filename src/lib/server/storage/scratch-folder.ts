import { randomUUID } from 'node:crypto';
import { closeSync, mkdirSync, openSync, rmSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import type { SampleScratch } from '../../recording/sample-scratch';
import { openFileHandle, type FileHandle } from './file-handle';

/** Samples that are collected before they are written: many small writes are slow. */
const WRITTEN_AT_ONCE_BYTES = 1 << 20;

/** Scratch files of one piece of work; `close` clears all of them away. */
export interface ScratchFolder extends SampleScratch {
	close(): void;
}

/** Scratch below `root`, in a folder of its own that is made at the first use. */
export function createScratchFolder(root: string): ScratchFolder {
	const folder = join(root, randomUUID());
	const descriptors = new Set<number>();
	const handles: FileHandle[] = [];
	return {
		create() {
			mkdirSync(folder, { recursive: true, mode: 0o700 });
			const path = join(folder, randomUUID());
			const descriptor = openSync(path, 'wx', 0o600);
			descriptors.add(descriptor);
			const buffer = new Uint8Array(WRITTEN_AT_ONCE_BYTES);
			let filled = 0;
			const flush = () => {
				for (let at = 0; at < filled;) at += writeSync(descriptor, buffer, at, filled - at);
				filled = 0;
			};
			return {
				append(bytes) {
					for (let at = 0; at < bytes.length;) {
						const piece = bytes.subarray(at, at + buffer.length - filled);
						buffer.set(piece, filled);
						filled += piece.length;
						at += piece.length;
						if (filled === buffer.length) flush();
					}
				},
				seal() {
					flush();
					closeSync(descriptor);
					descriptors.delete(descriptor);
					const handle = openFileHandle('samples', path);
					handles.push(handle);
					return handle;
				}
			};
		},
		close() {
			for (const descriptor of descriptors) closeSync(descriptor);
			descriptors.clear();
			for (const handle of handles.splice(0)) handle.close();
			rmSync(folder, { recursive: true, force: true });
		}
	};
}

/** Where scratch folders lie; whatever is in it when a worker starts was left by one that died. */
export function scratchRoot(dataDir: string): string {
	return join(dataDir, 'scratch');
}
