import { readdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';

/** Copies used more lately than this stay whatever the limit is: somebody may be about to open them. */
const IN_USE_MS = 3600_000;

/**
 * Clears local copies away, those longest unused first, until the rest keeps the limit.
 * folder  holds `ab/cdef…`; its `incoming` is left alone
 */
export async function makeRoom(folder: string, limit_bytes: number, now = Date.now()): Promise<void> {
	const copies: { path: string; size_bytes: number; used_ms: number }[] = [];
	for (const entry of await readdir(folder, { recursive: true, withFileTypes: true })) {
		if (!entry.isFile() || entry.parentPath.endsWith('incoming')) continue;
		const path = join(entry.parentPath, entry.name);
		const found = await stat(path).catch(() => null);
		if (found) copies.push({ path, size_bytes: found.size, used_ms: found.mtimeMs });
	}
	let total_bytes = copies.reduce((sum, copy) => sum + copy.size_bytes, 0);
	for (const copy of copies.sort((a, b) => a.used_ms - b.used_ms)) {
		if (total_bytes <= limit_bytes || now - copy.used_ms < IN_USE_MS) return;
		await rm(copy.path, { force: true });
		total_bytes -= copy.size_bytes;
	}
}
