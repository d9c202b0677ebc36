import type { IntervalCollector, ScalarSeries } from '../../harmonics/engine/interval-collector';
import { toWindowSeries } from '../../harmonics/interval-series';
import type { IntervalSeries } from '../../harmonics/intervals';
import type { FlickerMeasure } from '../../harmonics/engine/scalar-columns';
import type { ChannelFlicker } from '../../harmonics/flicker/follow-flicker';
import type { CaptureFindings, ChannelAnalysis, WaveformWindows } from '../../harmonics/waveform-analysis';
import type { AnalysisPart, NewScalarRow, NewSeriesRow } from '../repositories/analyses.repository';
import { encodeSeries, float32Buffer, float64ToBuffer } from './series-codec';

const NO_WAVEFORM_COLUMNS = {
	components: null,
	harmonic_groups: null,
	interharmonic_subgroups: null,
	interharmonic_groups: null,
	phases_deg: null,
	dc: null,
	peak: null
};

/** A series without the columns that only windows have. */
export function plainRow(series: IntervalSeries, channelIndex: number | null): NewSeriesRow {
	return { ...encodeSeries(series), channel_index: channelIndex, part: 0, ...NO_WAVEFORM_COLUMNS };
}

function channelColumns(channel: ChannelAnalysis) {
	return {
		channel_index: channel.mapping.channelIndex,
		components: float32Buffer(channel.components),
		harmonic_groups: float32Buffer(channel.groups),
		interharmonic_subgroups: float32Buffer(channel.interharmonicSubgroups),
		interharmonic_groups: float32Buffer(channel.interharmonicGroups),
		phases_deg: float32Buffer(channel.phases_deg),
		dc: float64ToBuffer(channel.dc),
		peak: float64ToBuffer(channel.peak)
	};
}

function scalarRow(series: ScalarSeries, part: number): NewScalarRow {
	const { measure, quantity, phase, unit, interval } = series;
	return {
		measure,
		quantity,
		phase,
		unit,
		interval,
		part,
		starts_ms: float64ToBuffer(series.starts_ms),
		values: float64ToBuffer(series.values)
	};
}

/** The windows of one span. */
export function windowPart(
	span: WaveformWindows,
	collector: IntervalCollector,
	part: number,
	start_ms: number
): AnalysisPart {
	return {
		series: toWindowSeries(span, start_ms).map((series, i) => ({
			...encodeSeries(series),
			...channelColumns(span.channels[i]!),
			part
		})),
		scalars: collector.windowScalars(span).map((series) => scalarRow(series, part))
	};
}

/** Pst and the greatest P_inst over ten minutes, Plt over two hours, per voltage. */
function flickerRows(flicker: readonly ChannelFlicker[]): NewScalarRow[] {
	const row = (
		phase: ChannelFlicker['phase'],
		measure: FlickerMeasure,
		interval: '10min' | '2h',
		values: readonly { start_ms: number; value: number }[]
	) =>
		scalarRow(
			{
				measure,
				quantity: 'voltage',
				phase,
				unit: '1',
				interval,
				starts_ms: Float64Array.from(values, (one) => one.start_ms),
				values: Float64Array.from(values, (one) => one.value)
			},
			0
		);
	return flicker.flatMap(({ phase, shortTerm, longTerm }) => [
		row(
			phase,
			'short-term-flicker',
			'10min',
			shortTerm.map(({ start_ms, pst }) => ({ start_ms, value: pst }))
		),
		row(
			phase,
			'greatest-flicker',
			'10min',
			shortTerm.map(({ start_ms, pInstMax }) => ({ start_ms, value: pInstMax }))
		),
		...(longTerm.length > 0
			? [
					row(
						phase,
						'long-term-flicker',
						'2h',
						longTerm.map(({ start_ms, plt }) => ({ start_ms, value: plt }))
					)
				]
			: [])
	]);
}

/** The aggregates of a capture, as far as it fills any, and the capture as one row. */
export function aggregatePart(
	collector: IntervalCollector,
	{ whole, flicker }: Pick<CaptureFindings, 'whole' | 'flicker'>,
	span: { start_ms: number; length_s: number; frequency_Hz: number }
): AnalysisPart {
	const series: NewSeriesRow[] = [];
	const scalars: NewScalarRow[] = flickerRows(flicker);
	for (const interval of ['3s', '10min', '2h'] as const) {
		collector.series(interval).forEach((one, i) => {
			if (one.starts_ms.length === 0) return;
			series.push({
				...plainRow(one, whole[i]!.mapping.channelIndex),
				interharmonic_subgroups: float32Buffer(one.interharmonicSubgroups)
			});
		});
		for (const one of collector.scalarSeries(interval))
			if (one.starts_ms.length > 0) scalars.push(scalarRow(one, 0));
	}
	for (const channel of whole) {
		series.push({
			...encodeSeries({
				quantity: channel.mapping.quantity,
				phase: channel.mapping.phase,
				interval: 'window',
				starts_ms: Float64Array.of(span.start_ms),
				lengths_s: Float64Array.of(span.length_s),
				rms: channel.rms,
				frequency_Hz: Float64Array.of(span.frequency_Hz),
				subgroups: channel.subgroups,
				flagged: Uint8Array.of(0)
			}),
			...channelColumns(channel),
			interval: 'whole',
			part: 0
		});
	}
	return { series, scalars };
}
