import { spawn } from 'node:child_process';
import { readdirSync, readFileSync } from 'node:fs';
import { waitUntilUp } from '../browser-person';

export interface PeakMemory {
	web_MB: number;
	worker_MB: number;
}

/** The built product as it is started in production, with the memory of its two processes in view. */
export interface ProductUnderWatch {
	origin: string;
	/** Most that was ever resident, threads and shared pages included (VmHWM of Linux). */
	peakMemory(): PeakMemory;
	stop(): Promise<void>;
}

export async function startProduct(env: NodeJS.ProcessEnv, origin: string): Promise<ProductUnderWatch> {
	const product = spawn(process.execPath, ['--import', 'tsx', 'scripts/serve.ts'], {
		env,
		stdio: ['ignore', 'ignore', 'inherit']
	});
	const ended = new Promise<void>((resolve) => product.once('exit', () => resolve()));
	await waitUntilUp(`${origin}/healthz`);
	const children = childrenOf(product.pid!);
	const peak_MB = (program: string) => {
		const pid = children.find((child) => commandOf(child).includes(program));
		if (pid === undefined) throw new Error(`${program} is not running.`);
		return highWater_MB(pid);
	};
	return {
		origin,
		peakMemory: () => ({ web_MB: peak_MB('build/index.js'), worker_MB: peak_MB('build/worker/main.js') }),
		async stop() {
			product.kill('SIGTERM');
			await ended;
		}
	};
}

const commandOf = (pid: number) => readFileSync(`/proc/${pid}/cmdline`, 'utf8');

function childrenOf(parent: number): number[] {
	return readdirSync('/proc')
		.filter((name) => /^\d+$/.test(name))
		.map(Number)
		.filter((pid) => {
			try {
				// The name stands in brackets and may hold anything; the parent is the second field behind it.
				const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
				return Number(stat.slice(stat.lastIndexOf(')') + 2).split(' ')[1]) === parent;
			} catch {
				return false;
			}
		});
}

function highWater_MB(pid: number): number {
	const line = /VmHWM:\s+(\d+) kB/.exec(readFileSync(`/proc/${pid}/status`, 'utf8'));
	return Number(line?.[1]) / 1024;
}
