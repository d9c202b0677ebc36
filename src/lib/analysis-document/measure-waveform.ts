import { analyseCapture, type AnalysisOptions } from '../harmonics/analyse-waveform';
import { pairChannels } from '../harmonics/engine/prepare-capture';
import { IntervalCollector } from '../harmonics/engine/interval-collector';
import { toWindowSeries } from '../harmonics/interval-series';
import { ORDER_STRIDE, type IntervalSeries } from '../harmonics/intervals';
import type { PointSystem } from '../harmonics/nominal-voltages';
import { PointPowerSums, type PointPower, type SamplePowers_W } from '../harmonics/power/point-power';
import type { LinePhase, PointWindows } from '../harmonics/power/point-windows';
import { PointSequenceSums, type PointSequences } from '../harmonics/sequence/point-sequences';
import type { CaptureFindings, ChannelMapping, WaveformWindows } from '../harmonics/waveform-analysis';
import type { CaptureSource } from '../recording/sample-source';
import { err, ok, type Result } from '../result';
import { CaptureMeans, type ChannelMeans } from './capture-means';

export interface IntervalCounts {
	window: number;
	threeSecond: number;
	tenMinute: number;
	twoHour: number;
	flagged: number;
}

/** What a pass over a waveform leaves behind; it does not grow with the windows, only with the aggregates. */
export interface MeasuredWaveform {
	findings: CaptureFindings;
	means: ChannelMeans[];
	counts: IntervalCounts;
	/** What an assessment looks at: 3 s and 10 min values, and windows where no 3 s value stands without a flag. */
	series: IntervalSeries[];
	power: PointPower | null;
	sequences: PointSequences | null;
}

/**
 * Analyses a waveform window by window and keeps means, aggregates and powers.
 * start_ms  instant of sample 0, ms since 1970-01-01 UTC; null: there is no clock, so no ten-minute or two-hour values
 */
export function measureWaveform(
	source: CaptureSource,
	mappings: readonly ChannelMapping[],
	system: PointSystem,
	start_ms: number | null,
	options: Omit<AnalysisOptions, 'start_ms' | 'onProgress'>
): Result<MeasuredWaveform, string> {
	const means = new CaptureMeans(mappings);
	const collector = new IntervalCollector(mappings, pairChannels(mappings), start_ms ?? 0);
	const power = new PointPowerSums();
	const sequences = new PointSequenceSums();
	let windows: IntervalSeries[] = [];
	let hasUnflagged = false;
	const onSpan = (span: WaveformWindows) => {
		means.accept(span);
		collector.accept(span);
		addPowers(span, system, power, sequences);
		hasUnflagged ||= collector.series('3s').some(({ flagged }) => flagged.includes(0));
		windows = hasUnflagged ? [] : [...windows, ...toWindowSeries(span, start_ms ?? 0)];
	};
	const steps = analyseCapture(
		source,
		mappings,
		start_ms === null ? options : { ...options, start_ms },
		onSpan
	);
	let step = steps.next();
	while (!step.done) step = steps.next();
	if (!step.value.ok) return err(step.value.problem.sentence);
	collector.finish();
	const threeSecond = collector.series('3s');
	const tenMinute = start_ms === null ? [] : collector.series('10min');
	const twoHour = start_ms === null ? [] : collector.series('2h');
	const countOf = (series: readonly IntervalSeries[]) => series[0]?.starts_ms.length ?? 0;
	const needsWindows = !threeSecond.some(({ flagged }) => flagged.includes(0));
	return ok({
		findings: step.value.value,
		means: means.channels(),
		counts: {
			window: means.windowCount,
			threeSecond: countOf(threeSecond),
			tenMinute: countOf(tenMinute),
			twoHour: countOf(twoHour),
			flagged: means.flaggedCount
		},
		series: [...threeSecond, ...tenMinute, ...(needsWindows ? windows : [])].filter(
			({ starts_ms }) => starts_ms.length > 0
		),
		power: power.finish(),
		sequences: sequences.finish()
	});
}

function addPowers(
	span: WaveformWindows,
	system: PointSystem,
	power: PointPowerSums,
	sequences: PointSequenceSums
): void {
	const point: PointWindows = { system, highestOrder: highestOrderOf(span), voltages: {}, currents: {} };
	for (const channel of span.channels) {
		const { quantity, phase } = channel.mapping;
		(quantity === 'voltage' ? point.voltages : point.currents)[phase] = channel;
	}
	const samplePowers: SamplePowers_W = {};
	for (const { phase, activePower_W } of span.powers) samplePowers[phase as LinePhase] = activePower_W;
	const all = Array.from({ length: span.windowCount }, (_, w) => w);
	power.add(point, all, samplePowers);
	sequences.add(point, all);
}

/** Highest order that any window of the span has. */
function highestOrderOf({ channels }: WaveformWindows): number {
	let highest = 1;
	for (const { components } of channels) {
		for (let at = 0; at < components.length; at++)
			if (at % ORDER_STRIDE > highest && !Number.isNaN(components[at]!)) highest = at % ORDER_STRIDE;
	}
	return highest;
}
