import { aggregateIntervals } from '../../harmonics/aggregation/aggregate-intervals';
import { analyseWaveformSteps } from '../../harmonics/analyse-waveform';
import { ENGINE_VERSION } from '../../harmonics/engine-version';
import { toWindowSeries } from '../../harmonics/interval-series';
import type { IntervalSeries } from '../../harmonics/intervals';
import { trendToIntervalSeries, type TrendMapping } from '../../harmonics/trend-intervals';
import type { ChannelAnalysis, ChannelMapping, WaveformAnalysis } from '../../harmonics/waveform-analysis';
import type { Phase, PhaseNames } from '../../recording/phase';
import type { Recording, Trend } from '../../recording/recording';
import { JobFailed, type JobContext } from '../jobs/job-definition';
import type { NewSeriesRow } from '../repositories/analyses.repository';
import type { BlobStore, StoredBlob } from '../storage/blob-store';
import type { AnalysisParameters, AnalysisSummary, TrendSummary } from './analysis-summary';
import { layOutSamples, samplesStream } from './samples-blob';
import { encodeSeries, float64ToBuffer } from './series-codec';

/** What the figures rest on beside the samples and the mapping. */
export interface AnalysisBasis {
	/** Instant of the first sample or interval, milliseconds since 1970-01-01 UTC. */
	start_ms: number;
	nominalFrequency_Hz: 50 | 60;
	nominalVoltages_V: Partial<Record<Phase, number>>;
	phaseNames: PhaseNames;
}

/** An analysis, computed and not yet stored. */
export interface PreparedAnalysis {
	engineVersion: string;
	parameters: Pick<AnalysisParameters, 'nominalFrequency_Hz' | 'start_ms'>;
	summary: AnalysisSummary;
	series: NewSeriesRow[];
	/** Derived samples for the waveform view; null for trends. */
	samples: StoredBlob | null;
}

const NO_WINDOW_COLUMNS = {
	components: null,
	interharmonic_subgroups: null,
	phases_deg: null,
	dc: null,
	peak: null
};

function windowRow(series: IntervalSeries, channel: ChannelAnalysis): NewSeriesRow {
	return {
		...encodeSeries(series),
		channel_index: channel.mapping.channelIndex,
		components: float64ToBuffer(channel.components),
		interharmonic_subgroups: float64ToBuffer(channel.interharmonicSubgroups),
		phases_deg: float64ToBuffer(channel.phases_deg),
		dc: float64ToBuffer(channel.dc),
		peak: float64ToBuffer(channel.peak)
	};
}

function plainRow(series: IntervalSeries, channelIndex: number | null): NewSeriesRow {
	return { ...encodeSeries(series), channel_index: channelIndex, ...NO_WINDOW_COLUMNS };
}

/** Windows of every channel, and their 3 s and 10 min aggregates where the capture fills any. */
function seriesRows(analysis: WaveformAnalysis, start_ms: number): NewSeriesRow[] {
	return toWindowSeries(analysis, start_ms).flatMap((series, i) => {
		const channel = analysis.channels[i]!;
		const aggregates = (['3s', '10min'] as const)
			.map((interval) => aggregateIntervals(series, interval).series)
			.filter((aggregate) => aggregate.starts_ms.length > 0)
			.map((aggregate) => plainRow(aggregate, channel.mapping.channelIndex));
		return [windowRow(series, channel), ...aggregates];
	});
}

async function runSteps(
	recording: Recording,
	mappings: readonly ChannelMapping[],
	basis: AnalysisBasis,
	context: Pick<JobContext, 'progress'>
): Promise<WaveformAnalysis> {
	const steps = analyseWaveformSteps(recording, mappings, basis);
	for (;;) {
		const step = steps.next();
		if (step.done) {
			if (!step.value.ok) throw new JobFailed(step.value.problem.sentence);
			return step.value.value;
		}
		const { done, total } = step.value;
		// One short of the end: what follows still has to be stored.
		await context.progress(Math.min(done, total), total + 1, `${done} of ${total} windows analysed`);
	}
}

/** Analyses a waveform window by window; stops between blocks when it was cancelled or the process is going down. */
export async function prepareWaveform(
	blobs: BlobStore,
	recording: Recording,
	mappings: readonly ChannelMapping[],
	basis: AnalysisBasis,
	context: Pick<JobContext, 'progress'>
): Promise<PreparedAnalysis> {
	const analysis = await runSteps(recording, mappings, basis, context);
	const samples = await blobs.putStream(samplesStream(recording, mappings), Number.MAX_SAFE_INTEGER);
	return {
		engineVersion: analysis.engineVersion,
		parameters: { nominalFrequency_Hz: analysis.nominalFrequency_Hz, start_ms: basis.start_ms },
		summary: {
			kind: 'waveform',
			nominalFrequency_Hz: analysis.nominalFrequency_Hz,
			cyclesPerWindow: analysis.cyclesPerWindow,
			referenceChannelIndex: analysis.referenceChannelIndex,
			highestOrder: analysis.highestOrder,
			windowCount: analysis.windowCount,
			flaggedCount: analysis.flagged.reduce((sum, flag) => sum + flag, 0),
			channels: analysis.channels.map(({ mapping, name }) => ({ ...mapping, name })),
			quality: analysis.quality,
			samples: { sha256: samples.sha256, ...layOutSamples(recording, mappings) }
		},
		series: seriesRows(analysis, basis.start_ms),
		samples
	};
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
			quality
		},
		series: rows,
		samples: null
	};
}
