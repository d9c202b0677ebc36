import { readFileSync } from 'node:fs';
import { basename } from 'node:path';
import { parsePointFile, type PointFile } from '../../src/lib/analysis-document/point-file';
import { err, type Result } from '../../src/lib/result';

/** Reads the facts of a point; a problem is a sentence. */
export function readPointFile(path: string): Result<PointFile, string> {
	let text: string;
	try {
		text = readFileSync(path, 'utf8');
	} catch {
		return err(`${path} cannot be read; name a JSON file with the facts of the point after --point.`);
	}
	return parsePointFile(basename(path), text);
}
