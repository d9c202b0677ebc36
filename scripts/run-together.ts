import { spawn, type ChildProcess } from 'node:child_process';
import { setTimeout as sleep } from 'node:timers/promises';

export interface Program {
	name: string;
	command: string;
	args: string[];
	/** Beside what both programs get. */
	env?: Record<string, string>;
}

const STOP_WITHIN_MS = 8000;
const READY_WITHIN_MS = 60_000;

async function answers(url: string): Promise<boolean> {
	return fetch(url).then(
		(response) => response.ok,
		() => false
	);
}

/**
 * Runs the programs side by side until one ends or a signal arrives, then stops all of them.
 * `onReady` is called once `readyUrl` answers. Resolves never: it ends the process with the right exit code.
 */
export async function runTogether(
	programs: Program[],
	env: NodeJS.ProcessEnv,
	readyUrl: string,
	onReady: () => void = () => undefined
): Promise<never> {
	const children = new Map<string, ChildProcess>();
	let stopping = false;
	let exitCode = 0;

	const stop = (code: number): void => {
		if (stopping) return;
		stopping = true;
		exitCode = code;
		for (const child of children.values()) child.kill('SIGTERM');
		setTimeout(() => {
			for (const child of children.values()) child.kill('SIGKILL');
		}, STOP_WITHIN_MS).unref();
	};

	process.once('SIGTERM', () => stop(0));
	process.once('SIGINT', () => stop(0));

	const ended = programs.map(
		(program) =>
			new Promise<void>((resolve) => {
				// The ipc channel lets a child notice that its parent is gone.
				const child = spawn(program.command, program.args, {
					env: { ...env, ...program.env },
					stdio: ['ignore', 'inherit', 'inherit', 'ipc']
				});
				children.set(program.name, child);
				child.once('exit', (code, signal) => {
					children.delete(program.name);
					if (!stopping) {
						console.error(
							`The ${program.name} process ended by itself (${signal ?? `code ${code}`}); stopping the other.`
						);
						stop(1);
					}
					resolve();
				});
			})
	);

	const deadline = Date.now() + READY_WITHIN_MS;
	while (!stopping && !(await answers(readyUrl))) {
		if (Date.now() > deadline) {
			console.error(`The web server did not answer at ${readyUrl} within a minute; stopping.`);
			stop(1);
		}
		await sleep(150);
	}
	if (!stopping) onReady();
	await Promise.all(ended);
	process.exit(exitCode);
}
