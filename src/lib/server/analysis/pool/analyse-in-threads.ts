import { randomUUID } from 'node:crypto';
import {
	analysisRun,
	analystSetup,
	type AnalysisOptions,
	type AnalysisStep
} from '../../../harmonics/analyse-waveform';
import type { AnalysisProblem } from '../../../harmonics/analysis-problem';
import { isUnevenlySampled } from '../../../harmonics/engine/stretches';
import type { WindowBlock } from '../../../harmonics/engine/window-analyst';
import type { CaptureFindings, ChannelMapping, WaveformWindows } from '../../../harmonics/waveform-analysis';
import type { CaptureSource } from '../../../recording/sample-source';
import type { Result } from '../../../result';
import type { ThreadCapture, WindowPool } from './window-pool';

/** Tasks that wait beside those being worked on, so that no thread has to. */
const WAITING = 2;

/**
 * The file and layout of a capture that threads can open by themselves; null where its samples lie in memory, or at uneven
 * times: those are integrated, not transformed, by `analyseCapture`.
 */
export function threadCapture(source: CaptureSource): ThreadCapture | null {
	const { samples, ...frame } = source;
	if (isUnevenlySampled(source)) return null;
	if (samples.kind !== 'rows' || !samples.file || !('path' in samples.file)) return null;
	const { path } = samples.file as { path: string };
	const { layout, firstByte = 0 } = samples;
	return { key: randomUUID(), frame: { ...frame, remarks: [] }, path, layout, firstByte };
}

/**
 * As analyseCapture, with the windows turned into figures by the pool's threads while this one places the next.
 * Blocks are accepted in order of time, so the figures are those of a single thread, digit for digit.
 */
export async function* analyseInThreads(
	source: CaptureSource,
	capture: ThreadCapture,
	pool: WindowPool,
	mappings: readonly ChannelMapping[],
	options: AnalysisOptions,
	onSpan: (span: WaveformWindows) => void
): AsyncGenerator<AnalysisStep, Result<CaptureFindings, AnalysisProblem>, void> {
	const started = analysisRun(source, mappings, options, onSpan);
	if (!started.ok) return started;
	const run = started.value;
	const pending: { planIndex: number; block: Promise<WindowBlock> }[] = [];
	for (const task of run.tasks) {
		const block = pool.run({ ...task, capture, setup: analystSetup(run.prepared, task.planIndex) });
		// Whoever awaits it later hears of a failure; until then it must not count as nobody's.
		block.catch(() => undefined);
		pending.push({ planIndex: task.planIndex, block });
		if (pending.length < pool.threadCount + WAITING) continue;
		const first = pending.shift()!;
		yield run.accept(first.planIndex, await first.block);
	}
	for (const { planIndex, block } of pending) yield run.accept(planIndex, await block);
	return run.finish();
}
