import { createHash } from 'node:crypto';
import { readdirSync, statSync } from 'node:fs';
import { basename, dirname, extname, join, resolve } from 'node:path';
import { groupCaptureFiles } from '../../src/lib/recording/group-capture-files';
import { err, ok, type Result } from '../../src/lib/result';
import { openFileHandle, type FileHandle } from '../../src/lib/server/storage/file-handle';

/** The file that a configuration or data file needs beside it. */
const COMPANION: Record<string, string> = { '.cfg': '.dat', '.dat': '.cfg', '.hdr': '.cfg', '.inf': '.cfg' };
const HASHED_BYTES = 1 << 20;

/**
 * The files of one capture: those named, and the configuration or data file beside them, whatever the case of its name.
 * returns  paths that exist, or a sentence
 */
export function captureFiles(named: readonly string[]): Result<string[], string> {
	for (const path of named) {
		const stat = statSync(path, { throwIfNoEntry: false });
		if (!stat) return err(`${path} does not exist; name the file of a capture.`);
		if (!stat.isFile()) return err(`${path} is no file; name the file of a capture.`);
	}
	const paths = [...named];
	// A companion may need one itself: a header file leads to the configuration, and that to the data.
	for (const path of paths) {
		const wanted = COMPANION[extname(path).toLowerCase()];
		if (wanted === undefined || hasSameCapture(paths, path, wanted)) continue;
		const found = beside(path, wanted);
		if (found !== null) paths.push(found);
	}
	const distinct = [...new Map(paths.map((path) => [resolve(path), path])).values()];
	const groups = groupCaptureFiles(distinct.map((path) => basename(path)));
	if (groups.length > 1)
		return err(
			`${named.map((path) => basename(path)).join(', ')} belong to ${groups.length} captures; run the command once for each capture.`
		);
	const order = groups[0]!;
	return ok(distinct.sort((a, b) => order.indexOf(basename(a)) - order.indexOf(basename(b))));
}

function stemOf(path: string): string {
	return basename(path, extname(path));
}

function hasSameCapture(paths: readonly string[], path: string, extension: string): boolean {
	return paths.some(
		(other) =>
			extname(other).toLowerCase() === extension && stemOf(other).toLowerCase() === stemOf(path).toLowerCase()
	);
}

/** The file of the same stem and another extension in the same folder; one spelt alike comes first. */
function beside(path: string, extension: string): string | null {
	const folder = dirname(path);
	const fitting = readdirSync(folder)
		.filter((name) => extname(name).toLowerCase() === extension)
		.filter((name) => stemOf(name).toLowerCase() === stemOf(path).toLowerCase())
		.sort((a, b) => Number(stemOf(b) === stemOf(path)) - Number(stemOf(a) === stemOf(path)));
	return fitting[0] === undefined ? null : join(folder, fitting[0]);
}

export function openFiles(paths: readonly string[]): FileHandle[] {
	return paths.map((path) => openFileHandle(basename(path), path));
}

/** SHA-256 of a file, read piece by piece. */
export function sha256Of(handle: FileHandle): string {
	const hash = createHash('sha256');
	const buffer = new Uint8Array(HASHED_BYTES);
	for (let at = 0; at < handle.size_bytes; at += HASHED_BYTES) {
		const piece = buffer.subarray(0, Math.min(HASHED_BYTES, handle.size_bytes - at));
		handle.read(at, piece);
		hash.update(piece);
	}
	return hash.digest('hex');
}
