import { aggregateIntervals } from '../../harmonics/aggregation/aggregate-intervals';
import { analyseCapture } from '../../harmonics/analyse-waveform';
import { IntervalCollector } from '../../harmonics/engine/interval-collector';
import { pairChannels } from '../../harmonics/engine/prepare-capture';
import { ENGINE_VERSION } from '../../harmonics/engine-version';
import { captureEvidence } from '../../harmonics/quality/capture-evidence';
import { trendEvidence } from '../../harmonics/quality/trend-evidence';
import { trendToIntervalSeries, type TrendMapping } from '../../harmonics/trend-intervals';
import type { CaptureFindings, ChannelMapping, WaveformWindows } from '../../harmonics/waveform-analysis';
import type { Phase, PhaseNames } from '../../recording/phase';
import type { Trend } from '../../recording/recording';
import type { CaptureSource } from '../../recording/sample-source';
import { JobFailed, type JobContext } from '../jobs/job-definition';
import type { AnalysisPart } from '../repositories/analyses.repository';
import type { ServiceDeps } from '../service-deps';
import type { StoredBlob } from '../storage/blob-store';
import type { AnalysisParameters, AnalysisSummary, TrendSummary } from './analysis-summary';
import { analyseInThreads, threadCapture } from './pool/analyse-in-threads';
import { layOutSamples, samplesStream } from './samples-blob';
import { aggregatePart, plainRow, windowPart } from './series-rows';

/** What the figures rest on beside the samples and the mapping. */
export interface AnalysisBasis {
	/** Instant of the first sample or interval, milliseconds since 1970-01-01 UTC. */
	start_ms: number;
	nominalFrequency_Hz: 50 | 60;
	nominalVoltages_V: Partial<Record<Phase, number>>;
	phaseNames: PhaseNames;
}

/** An analysis, computed; windows have been stored on the way, the rest is here. */
export interface PreparedAnalysis {
	engineVersion: string;
	parameters: Pick<AnalysisParameters, 'nominalFrequency_Hz' | 'start_ms'>;
	summary: AnalysisSummary;
	last: AnalysisPart;
	/** Derived samples for the waveform view; null for trends. */
	samples: StoredBlob | null;
}

/** Events that are kept with the summary; whoever has more looks at the flagged intervals. */
const MOST_EVENTS = 2000;

/** Stores the windows of one span as soon as they are there. */
export type StorePart = (part: AnalysisPart) => Promise<void>;

/** What became of the windows beside being stored. */
interface WindowsSeen {
	windowCount: number;
	flaggedCount: number;
	start_s: number;
	end_s: number;
}

/** Analyses a waveform window by window; stops between blocks when it was cancelled or the process is going down. */
export async function prepareWaveform(
	{ blobs, windowPool: pool }: Pick<ServiceDeps, 'blobs' | 'windowPool'>,
	source: CaptureSource,
	mappings: readonly ChannelMapping[],
	basis: AnalysisBasis,
	context: Pick<JobContext, 'progress'>,
	store: StorePart
): Promise<PreparedAnalysis> {
	const { start_ms } = basis;
	const collector = new IntervalCollector(mappings, pairChannels(mappings), start_ms);
	const spans: WaveformWindows[] = [];
	const seen: WindowsSeen = { windowCount: 0, flaggedCount: 0, start_s: NaN, end_s: NaN };
	let part = 0;
	async function storeSpans(): Promise<void> {
		for (const span of spans.splice(0)) {
			collector.accept(span);
			note(seen, span);
			await store(windowPart(span, collector, part++, start_ms));
		}
	}
	const onSpan = (span: WaveformWindows) => void spans.push(span);
	const inThreads = pool && threadCapture(source);
	const steps = inThreads
		? analyseInThreads(source, inThreads, pool, mappings, basis, onSpan)
		: analyseCapture(source, mappings, basis, onSpan);
	let findings: CaptureFindings;
	for (;;) {
		const step = await steps.next();
		await storeSpans();
		if (step.done) {
			if (!step.value.ok) throw new JobFailed(step.value.problem.sentence);
			findings = step.value.value;
			break;
		}
		const { done, total } = step.value;
		// One short of the end: what follows still has to be stored.
		await context.progress(Math.min(done, total), total + 1, `${done} of ${total} windows analysed`);
	}
	collector.finish();
	const samples = await blobs.putStream(samplesStream(source, mappings), Number.MAX_SAFE_INTEGER);
	return {
		engineVersion: findings.engineVersion,
		parameters: { nominalFrequency_Hz: findings.nominalFrequency_Hz, start_ms },
		summary: {
			kind: 'waveform',
			nominalFrequency_Hz: findings.nominalFrequency_Hz,
			cyclesPerWindow: findings.cyclesPerWindow,
			referenceChannelIndex: findings.referenceChannelIndex,
			highestOrder: findings.highestOrder,
			windowCount: seen.windowCount,
			flaggedCount: seen.flaggedCount,
			channels: findings.whole.map(({ mapping, name }) => ({ ...mapping, name })),
			quality: findings.quality,
			evidence: captureEvidence(source, findings),
			samples: { sha256: samples.sha256, ...layOutSamples(source, mappings) },
			events:
				findings.events?.slice(0, MOST_EVENTS).map(({ kind, start_s, end_s, extreme_pct, phases }) => ({
					kind,
					start_s,
					end_s,
					extreme_pct,
					phases: phases.map(({ phase }) => phase)
				})) ?? null
		},
		last: aggregatePart(collector, findings, {
			start_ms: start_ms + 1000 * seen.start_s,
			length_s: seen.end_s - seen.start_s,
			frequency_Hz: findings.meanFrequency_Hz
		}),
		samples
	};
}

function note(seen: WindowsSeen, span: WaveformWindows): void {
	if (seen.windowCount === 0) seen.start_s = span.windowStarts_s[0]!;
	seen.windowCount += span.windowCount;
	seen.flaggedCount += span.flagged.reduce((sum, flag) => sum + flag, 0);
	seen.end_s = span.windowStarts_s.at(-1)! + span.windowLengths_s.at(-1)!;
}

/** A trend log as interval series; ten-minute values are made of three-second ones where the log has those. */
export async function prepareTrend(
	trend: Trend,
	mappings: readonly TrendMapping[],
	basis: AnalysisBasis
): Promise<PreparedAnalysis> {
	const converted = trendToIntervalSeries(trend, mappings, basis.start_ms);
	if (!converted.ok) throw new JobFailed(converted.problem.sentence);
	const { series, sentences } = converted.value;
	const rows = series.flatMap((one) => {
		if (one.interval !== '3s') return [plainRow(one, null)];
		const tenMinutes = aggregateIntervals(one, '10min').series;
		return tenMinutes.starts_ms.length > 0
			? [plainRow(one, null), plainRow(tenMinutes, null)]
			: [plainRow(one, null)];
	});
	const flagged = series[0]?.flagged;
	const quality: TrendSummary['quality'] = sentences.map((sentence) => ({
		severity: 'notes',
		code: 'trend-column',
		sentence,
		channelIndex: null
	}));
	return {
		engineVersion: ENGINE_VERSION,
		parameters: { nominalFrequency_Hz: basis.nominalFrequency_Hz, start_ms: basis.start_ms },
		summary: {
			kind: 'trend',
			interval_s: trend.interval_s,
			intervalCount: trend.intervalStarts_s.length,
			flaggedCount: flagged ? flagged.reduce((sum, flag) => sum + flag, 0) : 0,
			quality,
			evidence: trendEvidence(series, mappings, basis.start_ms, trend.nominalFrequency_Hz)
		},
		last: { series: rows, scalars: [] },
		samples: null
	};
}
