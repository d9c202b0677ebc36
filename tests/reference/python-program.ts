import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';

/** Whether python3 is here with a library. */
export function pythonHas(library: 'numpy' | 'scipy'): boolean {
	return spawnSync('python3', ['-c', `import ${library}`]).status === 0;
}

/** Runs a program of tests/reference/python: JSON in, JSON out. Numbers cross with all their digits. */
export function runPython<T>(program: string, task: unknown): T {
	const path = fileURLToPath(new URL(`python/${program}`, import.meta.url));
	const run = spawnSync('python3', [path], { input: JSON.stringify(task), encoding: 'utf8', maxBuffer: 1e8 });
	if (run.status !== 0) throw new Error(run.stderr);
	return JSON.parse(run.stdout) as T;
}
