import { IntervalCollector } from '../../src/lib/harmonics/engine/interval-collector';
import { pairChannels } from '../../src/lib/harmonics/engine/prepare-capture';
import { analyseInThreads, threadCapture } from '../../src/lib/server/analysis/pool/analyse-in-threads';
import type { WindowPool } from '../../src/lib/server/analysis/pool/window-pool';
import { mappingsOf, NOMINAL_VOLTAGES_V, openOnDisk, START_MS } from './capture-on-disk';

export interface PassFigures {
	seconds: number;
	cpu_s: number;
	windowCount: number;
	/** Of the first channel over the whole capture, V: a check that both programs read the same file. */
	rms_V: number;
	/** Fifth order of the first channel over the whole capture, percent of its fundamental. */
	fifth_pct: number;
}

/** Everything that the worker computes of a capture: windows, groups, powers, events, flags, scalars, intervals. */
export async function analysisPass(
	files: { cfg: string; dat: string },
	pool: WindowPool
): Promise<PassFigures> {
	const before = process.cpuUsage();
	const begin = performance.now();
	const { source, close } = openOnDisk(files);
	const mappings = mappingsOf(source);
	const collector = new IntervalCollector(mappings, pairChannels(mappings), START_MS);
	const options = {
		nominalFrequency_Hz: 50,
		nominalVoltages_V: NOMINAL_VOLTAGES_V,
		start_ms: START_MS
	} as const;
	const steps = analyseInThreads(source, threadCapture(source)!, pool, mappings, options, (span) => {
		collector.accept(span);
		collector.windowScalars(span);
	});
	let step = await steps.next();
	let windowCount = 0;
	for (; !step.done; step = await steps.next()) windowCount = step.value.done;
	close();
	if (!step.value.ok) throw new Error(step.value.problem.sentence);
	collector.finish();
	for (const interval of ['3s', '10min'] as const) {
		collector.series(interval);
		collector.scalarSeries(interval);
	}
	const seconds = (performance.now() - begin) / 1000;
	const cpu = process.cpuUsage(before);
	const whole = step.value.value.whole[0]!;
	return {
		seconds,
		cpu_s: (cpu.user + cpu.system) / 1e6,
		windowCount,
		rms_V: whole.rms[0]!,
		fifth_pct: (100 * whole.subgroups[5]!) / whole.subgroups[1]!
	};
}
