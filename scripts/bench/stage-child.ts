/** A process of its own, in one thread, that times the stages of an analysis; prints JSON. With --profile, functions too. */
import { Session } from 'node:inspector/promises';
import { analysisRun, analystSetup } from '../../src/lib/harmonics/analyse-waveform';
import { IntervalCollector } from '../../src/lib/harmonics/engine/interval-collector';
import { pairChannels } from '../../src/lib/harmonics/engine/prepare-capture';
import { WindowAnalyst } from '../../src/lib/harmonics/engine/window-analyst';
import type { WaveformWindows } from '../../src/lib/harmonics/waveform-analysis';
import { createSignalKernels } from '../../src/lib/numerics/kernels/create-kernels';
import type { KernelShape, SignalKernels } from '../../src/lib/numerics/kernels/signal-kernels';
import type { CaptureSource } from '../../src/lib/recording/sample-source';
import { mappingsOf, NOMINAL_VOLTAGES_V, openOnDisk, START_MS } from './capture-on-disk';
import { selfTimes, type Profile } from './self-times';

const STAGES = [
	'opening the files',
	'first look',
	'placing windows',
	'reading the file',
	'de-interleaving',
	'interpolation and transform',
	'squares and extremes',
	'figures of windows',
	'assembly, events and flags',
	'intervals and scalars'
] as const;
type Stage = (typeof STAGES)[number];

const spent_ms = new Map<Stage, number>();

function timed<T>(stage: Stage, work: () => T): T {
	const begin = performance.now();
	const result = work();
	spent_ms.set(stage, (spent_ms.get(stage) ?? 0) + performance.now() - begin);
	return result;
}

function timedKernels(shape: KernelShape): SignalKernels {
	const kernels = createSignalKernels(shape);
	const { guard, raw, samples, windows, spectra } = kernels;
	return {
		shape,
		guard,
		raw,
		samples,
		windows,
		spectra,
		decodeRows: (...call) => timed('de-interleaving', () => kernels.decodeRows(...call)),
		slide: (...call) => timed('de-interleaving', () => kernels.slide(...call)),
		transformWindow: (...call) =>
			timed('interpolation and transform', () => kernels.transformWindow(...call)),
		stretch: (...call) => timed('squares and extremes', () => kernels.stretch(...call))
	};
}

function withTimedReads(source: CaptureSource): CaptureSource {
	const { samples } = source;
	if (samples.kind !== 'rows') return source;
	const read: typeof samples.read = (...call) => timed('reading the file', () => samples.read(...call));
	return { ...source, samples: { ...samples, read } };
}

/** One analysis; what a stage calls of another is taken off it. */
function run(files: { cfg: string; dat: string }): { seconds: number; stages: Record<string, number> } {
	spent_ms.clear();
	const begin = performance.now();
	const { source, close } = timed('opening the files', () => openOnDisk(files));
	const mappings = mappingsOf(source);
	const collector = new IntervalCollector(mappings, pairChannels(mappings), START_MS);
	const options = {
		nominalFrequency_Hz: 50,
		nominalVoltages_V: NOMINAL_VOLTAGES_V,
		start_ms: START_MS
	} as const;
	const onSpan = (span: WaveformWindows) =>
		timed('intervals and scalars', () => {
			collector.accept(span);
			collector.windowScalars(span);
		});
	const started = timed('first look', () => analysisRun(source, mappings, options, onSpan));
	if (!started.ok) throw new Error(started.problem.sentence);
	const { prepared, tasks, accept, finish } = started.value;
	const analyst = new WindowAnalyst(withTimedReads(source), analystSetup(prepared, 0), timedKernels);
	const iterator = tasks[Symbol.iterator]();
	for (;;) {
		const task = timed('placing windows', () => iterator.next());
		if (task.done) break;
		const block = timed('figures of windows', () => analyst.analyse(task.value.windows));
		timed('assembly, events and flags', () => accept(task.value.planIndex, block));
	}
	timed('assembly, events and flags', finish);
	timed('intervals and scalars', () => collector.finish());
	close();
	const seconds = (performance.now() - begin) / 1000;
	const of = (stage: Stage) => spent_ms.get(stage) ?? 0;
	const inner = (
		['reading the file', 'de-interleaving', 'interpolation and transform', 'squares and extremes'] as const
	)
		.map(of)
		.reduce((sum, ms) => sum + ms, 0);
	spent_ms.set('figures of windows', of('figures of windows') - inner);
	spent_ms.set('assembly, events and flags', of('assembly, events and flags') - of('intervals and scalars'));
	const stages = Object.fromEntries(STAGES.map((stage) => [stage, of(stage) / 1000]));
	return { seconds, stages: { ...stages, rest: seconds - sum(Object.values(stages)) } };
}

const sum = (values: number[]) => values.reduce((total, value) => total + value, 0);

const [cfg, dat, option] = process.argv.slice(2) as [string, string, string?];
const files = { cfg, dat };
run(files);
const runs = [run(files), run(files), run(files)].sort((a, b) => a.seconds - b.seconds);
const { seconds, stages } = runs[1]!;
const shares_pct = Object.fromEntries(
	Object.entries(stages).map(([stage, spent_s]) => [stage, (100 * spent_s) / seconds])
);
let functions: { name: string; share_pct: number }[] = [];
if (option === '--profile') {
	const session = new Session();
	session.connect();
	await session.post('Profiler.enable');
	await session.post('Profiler.setSamplingInterval', { interval: 250 });
	await session.post('Profiler.start');
	run(files);
	const { profile } = (await session.post('Profiler.stop')) as { profile: Profile };
	functions = selfTimes(profile);
}
process.stdout.write(`${JSON.stringify({ seconds, shares_pct, functions })}\n`);
