import { spawn } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';

export interface Finding {
	reader: string;
	input: number;
	faults: string[];
}

export interface Bounds {
	/** Longest that one input may take. */
	input_s: number;
	/** Most memory of the process that reads. */
	memory_MB: number;
}

export interface Stretch {
	/** Module that exports FUZZED_READERS. */
	module: string;
	reader: string;
	seed: number;
	from: number;
	to: number;
}

const CHILD = fileURLToPath(new URL('./fuzz-child.ts', import.meta.url));
const LOOK_EVERY_MS = 100;

/** Resident memory of a process, MB; 0 when it cannot be had. */
function resident_MB(pid: number | undefined): number {
	try {
		return (Number(readFileSync(`/proc/${pid}/statm`, 'utf8').split(' ')[1]) * 4096) / 2 ** 20;
	} catch {
		return 0;
	}
}

/** Reads a stretch of inputs in a process of its own; one that hangs or takes too much memory is ended, and the next goes on. */
export async function watchedRun(stretch: Stretch, bounds: Bounds): Promise<Finding[]> {
	const findings: Finding[] = [];
	for (let from = stretch.from; from < stretch.to;) {
		const end = await oneProcess({ ...stretch, from }, bounds, findings);
		if (end === null) break;
		findings.push({ reader: stretch.reader, input: end.input, faults: [end.fault] });
		from = end.input + 1;
	}
	return findings.sort((one, other) => one.input - other.input);
}

/** returns  the input at which the process ended too soon, and why; null when it came to its end */
function oneProcess(
	{ module, reader, seed, from, to }: Stretch,
	{ input_s, memory_MB }: Bounds,
	findings: Finding[]
): Promise<{ input: number; fault: string } | null> {
	return new Promise((resolve, reject) => {
		const child = spawn(
			process.execPath,
			[
				`--max-old-space-size=${memory_MB}`,
				'--import',
				'tsx',
				CHILD,
				module,
				reader,
				...[seed, from, to].map(String)
			],
			{ stdio: ['ignore', 'pipe', 'pipe'] }
		);
		let input = from;
		let begun = false;
		let since = performance.now();
		let ended: string | null = null;
		let complaint = '';
		createInterface({ input: child.stdout }).on('line', (line) => {
			const said = JSON.parse(line) as { input: number; faults?: string[] };
			if (said.faults) findings.push({ reader, input: said.input, faults: said.faults });
			else {
				begun = true;
				input = said.input;
				since = performance.now();
			}
		});
		child.stderr.on('data', (bytes: Buffer) => (complaint = (complaint + bytes.toString()).slice(-2000)));
		const watch = setInterval(() => {
			// Starting the process is not the reader's time.
			if (begun && performance.now() - since > 1000 * input_s) ended = `not done after ${input_s} s`;
			else if (resident_MB(child.pid) > memory_MB) ended = `more than ${memory_MB} MB of memory`;
			if (ended !== null) child.kill('SIGKILL');
		}, LOOK_EVERY_MS);
		child.once('close', (code) => {
			clearInterval(watch);
			if (ended === null && code === 0) resolve(null);
			else if (!begun) reject(new Error(`The process of ${reader} did not start: ${complaint}`));
			else resolve({ input, fault: ended ?? `the process ended with ${code}: ${complaint}` });
		});
	});
}
