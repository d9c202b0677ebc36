import { readdirSync, readFileSync } from 'node:fs';
import { parseLimitFile, type ParsedLimitFile } from '$lib/limits/parse-limit-file';
import type { LimitSet, LimitTable } from '$lib/limits/limit-set';

const FOLDER = new URL('../../seeds/limits/', import.meta.url);

export const LIMIT_FILE_KEYS = readdirSync(FOLDER)
	.filter((name) => name.endsWith('.json'))
	.map((name) => name.replace(/\.json$/, ''));

export function limitFileJson(key: string): unknown {
	return JSON.parse(readFileSync(new URL(`${key}.json`, FOLDER), 'utf8'));
}

export function parsedLimitFile(key: string): ParsedLimitFile {
	const parsed = parseLimitFile(key, limitFileJson(key));
	if (!parsed.ok) throw new Error(parsed.problem.sentence);
	return parsed.value;
}

export function limitSet(key: string): LimitSet {
	return parsedLimitFile(key).limitSet;
}

export function limitTable(setKey: string, tableKey: string): LimitTable {
	const table = limitSet(setKey).tables.find((candidate) => candidate.key === tableKey);
	if (table === undefined) throw new Error(`${setKey} has no ${tableKey}`);
	return table;
}
