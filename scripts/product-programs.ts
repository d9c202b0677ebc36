import type { Program } from './run-together';

/**
 * Figures are made and let go of all the time while a capture is analysed. With a small nursery and few arenas of the
 * C library the worker's memory stays near what it really holds.
 */
const WORKER_ARGS = ['--max-semi-space-size=4'];
const WORKER_ENV = { MALLOC_ARENA_MAX: '2' };

/** The two programs of the built product. */
export const PRODUCT_PROGRAMS: Program[] = [
	{ name: 'web', command: process.execPath, args: ['build/index.js'] },
	{
		name: 'worker',
		command: process.execPath,
		args: [...WORKER_ARGS, 'build/worker/main.js'],
		env: WORKER_ENV
	}
];
