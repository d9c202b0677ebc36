import { spawn } from 'node:child_process';
import { createInterface } from 'node:readline';

/** A program under measurement in a process of its own; asked in lines, answers in lines of JSON. */
export interface Contestant {
	/** From the start of the process until it was ready for the first pass. */
	startUp_s: number;
	ask<T>(command: string): Promise<T>;
	end(): Promise<void>;
}

export async function startContestant(command: string, args: readonly string[]): Promise<Contestant> {
	const begin = performance.now();
	const child = spawn(command, args, { stdio: ['pipe', 'pipe', 'inherit'] });
	const ended = new Promise<void>((resolve) => child.once('close', () => resolve()));
	const lines = createInterface({ input: child.stdout })[Symbol.asyncIterator]();
	async function answer(): Promise<string> {
		const line = await lines.next();
		if (line.done) throw new Error(`${command} ended without an answer.`);
		return line.value;
	}
	await answer();
	return {
		startUp_s: (performance.now() - begin) / 1000,
		async ask<T>(question: string) {
			child.stdin.write(`${question}\n`);
			return JSON.parse(await answer()) as T;
		},
		async end() {
			child.stdin.end();
			await ended;
		}
	};
}
