import { mkdirSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';

/** Path of the SQLite file under the data folder; the folder is made when it is missing. */
export function databaseFile(env: Record<string, string | undefined>): string {
	const file = resolve(join(env['DATA_DIR'] ?? 'data', 'sinewright.sqlite'));
	mkdirSync(dirname(file), { recursive: true });
	return file;
}
