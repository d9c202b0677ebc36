import { execFileSync, spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import { availableParallelism, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';
import type { PassFigures } from './bench/analysis-pass';
import { makeCapture, ROW_BYTES, SAMPLING_RATE_HZ, type CaptureOnDisk } from './bench/capture-on-disk';
import { compileChildren } from './bench/compile-children';
import { startContestant } from './bench/contestant';
import { printReport, type BenchReport, type Contest } from './bench/report';
import type { VerdictFigures } from './bench/verdict-pass';

// npm run bench -- [--duration 60 | --size 60MB|1GB] [--repeats 7] [--verdict] [--profile] [--json]
const USAGE =
	'Use --duration SECONDS or --size 60MB (or 1GB), --repeats N, --verdict, --profile (functions by time), --json.';
const { values: options } = parseArgs({
	options: {
		duration: { type: 'string' },
		size: { type: 'string' },
		repeats: { type: 'string', default: '7' },
		verdict: { type: 'boolean', default: false },
		profile: { type: 'boolean', default: false },
		json: { type: 'boolean', default: false }
	}
});

/** Size that a capture has when its verdict is timed. */
const VERDICT_BYTES = 60e6;
const duration_s = durationOf(options.size, options.duration);
const repeats = Number(options.repeats);
if (!(duration_s >= 1) || !(repeats >= 1)) throw new Error(USAGE);

const script = fileURLToPath(new URL('../tests/bench/fixed_window.py', import.meta.url));
const compiled = fileURLToPath(new URL(`../node_modules/.bench-${process.pid}`, import.meta.url));
const folder = mkdtempSync(join(tmpdir(), 'sinewright-bench-'));
try {
	await compileChildren(compiled);
	const report = await measure();
	if (options.json) console.log(JSON.stringify(report));
	else printReport(report);
} finally {
	rmSync(folder, { recursive: true });
	rmSync(compiled, { recursive: true, force: true });
}

function durationOf(size: string | undefined, duration: string | undefined): number {
	const [, number, unit] = /^([\d.]+)(MB|GB)$/.exec(size ?? '') ?? [];
	if (size !== undefined && number === undefined) throw new Error(USAGE);
	const bytes = Number(number) * (unit === 'GB' ? 1e9 : 1e6);
	return number === undefined ? Number(duration ?? 60) : bytes / ROW_BYTES / SAMPLING_RATE_HZ;
}

async function measure(): Promise<BenchReport> {
	const capture = makeCapture(folder, duration_s);
	const report: BenchReport = {
		capture: {
			bytes: capture.bytes,
			duration_s: capture.duration_s,
			channels: 8,
			samplingRate_Hz: SAMPLING_RATE_HZ
		},
		cores: availableParallelism(),
		repeats,
		...(await contest(capture)),
		...stages(capture)
	};
	return options.verdict ? { ...report, verdict: await timeVerdict() } : report;
}

/** Both programs take turns in processes that stay; the first pass of each warms it up and is not counted. */
async function contest(
	capture: CaptureOnDisk
): Promise<Pick<BenchReport, 'analysis' | 'fixedWindow' | 'ratio'>> {
	const ours = await startContestant(process.execPath, [
		join(compiled, 'analysis-child.js'),
		capture.cfg,
		capture.dat
	]);
	const hasNumpy = spawnSync('python3', ['-c', 'import numpy']).status === 0;
	const other = hasNumpy
		? await startContestant('python3', [script, capture.dat, JSON.stringify(capture.factors)])
		: null;
	const passes: { ours: PassFigures[]; other: PassFigures[] } = { ours: [], other: [] };
	for (let i = 0; i <= repeats; i++) {
		const mine = await ours.ask<PassFigures>('pass');
		const theirs = await other?.ask<PassFigures>('pass');
		if (i === 0) continue;
		passes.ours.push(mine);
		if (theirs) passes.other.push(theirs);
	}
	const figuresOf = async (contestant: typeof ours, list: PassFigures[]): Promise<Contest> => {
		const seconds = median(list.map((pass) => pass.seconds));
		const { windowCount, rms_V, fifth_pct } = list[0]!;
		return {
			startUp_s: contestant.startUp_s,
			seconds,
			cpu_s: median(list.map((pass) => pass.cpu_s)),
			timesRealTime: capture.duration_s / seconds,
			peakMemory_MB: (await contestant.ask<{ peak_MB: number }>('memory')).peak_MB,
			windowCount,
			rms_V,
			fifth_pct
		};
	};
	const analysis = await figuresOf(ours, passes.ours);
	const fixedWindow = other && (await figuresOf(other, passes.other));
	await Promise.all([ours.end(), other?.end()]);
	return { analysis, fixedWindow, ratio: fixedWindow && fixedWindow.seconds / analysis.seconds };
}

function stages({ cfg, dat }: CaptureOnDisk): Pick<BenchReport, 'stages'> {
	const args = [join(compiled, 'stage-child.js'), cfg, dat, ...(options.profile ? ['--profile'] : [])];
	return {
		stages: JSON.parse(execFileSync(process.execPath, args, { encoding: 'utf8' })) as BenchReport['stages']
	};
}

async function timeVerdict(): Promise<BenchReport['verdict']> {
	const aside = join(folder, 'verdict');
	mkdirSync(aside);
	const capture = makeCapture(aside, VERDICT_BYTES / ROW_BYTES / SAMPLING_RATE_HZ);
	const ours = await startContestant(process.execPath, [
		join(compiled, 'analysis-child.js'),
		capture.cfg,
		capture.dat
	]);
	const first = await ours.ask<VerdictFigures>('verdict');
	const rest: VerdictFigures[] = [];
	for (let i = 0; i < Math.min(repeats, 5); i++) rest.push(await ours.ask<VerdictFigures>('verdict'));
	await ours.end();
	return {
		bytes: capture.bytes,
		first_s: first.verdict_s,
		analysed_s: median(rest.map((pass) => pass.analysed_s)),
		verdict_s: median(rest.map((pass) => pass.verdict_s)),
		verdicts: first.verdicts
	};
}

function median(values: readonly number[]): number {
	const sorted = [...values].sort((a, b) => a - b);
	const middle = sorted.length >> 1;
	return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}
