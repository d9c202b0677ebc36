import { renderChartSvg } from '../../charts/render-chart-svg';
import { buildSpectrumOption } from '../../charts/spectrum-chart';
import { buildTrendOption } from '../../charts/trend-chart';
import { buildWaveformOption } from '../../charts/waveform-chart';
import { formatPhase, type Phase } from '../../recording/phase';
import type { ReportModel, ReportSpectrum, ReportTrend, ReportWaveform } from '../../report/report-model';
import type { ReportDrawings } from './sheet-context';

/** Width at which a chart's 12 px text prints at about the size of the sheet's notes. */
const WIDTH_PX = 760;
const SPECTRUM_SIZE = { width_px: WIDTH_PX, height_px: 300 };
const COURSE_SIZE = { width_px: WIDTH_PX, height_px: 270 };

function namer(model: ReportModel): (phase: Phase) => string {
	return (phase) => formatPhase(phase, model.point.phaseNames);
}

function spectrumSvg(spectrum: ReportSpectrum, name: (phase: Phase) => string): string {
	const option = buildSpectrumOption(
		{
			orders: spectrum.orders,
			phases: spectrum.phases.map(({ phase, values_pct }) => ({
				phase,
				label: name(phase),
				values: values_pct
			})),
			limits: spectrum.limits_pct,
			valueAxis: spectrum.note.replace(/\.$/, '').replace(/^Percent/, 'percent')
		},
		'print',
		SPECTRUM_SIZE
	);
	return renderChartSvg(option, SPECTRUM_SIZE);
}

function waveformSvgs(waveform: ReportWaveform, name: (phase: Phase) => string): string[] {
	return (['voltage', 'current'] as const).flatMap((quantity) => {
		const channels = waveform.channels.filter((channel) => channel.quantity === quantity);
		if (channels.length === 0) return [];
		const option = buildWaveformOption(
			{
				channels: channels.map((channel) => ({
					label: name(channel.phase),
					phase: channel.phase,
					quantity,
					unit: channel.unit,
					points: channel.points.map((value) => value ?? NaN)
				})),
				extent_s: { from: waveform.from_s, to: waveform.to_s }
			},
			'print',
			COURSE_SIZE
		);
		return [renderChartSvg(option, COURSE_SIZE)];
	});
}

function trendSvg(trend: ReportTrend, name: (phase: Phase) => string, zone: string): string {
	const option = buildTrendOption(
		{
			series: trend.phases.map(({ phase, times_ms, values_pct }) => ({
				label: name(phase),
				phase,
				times_ms,
				values: values_pct
			})),
			valueAxis: `percent ${trend.ofWhat}`,
			percentile: trend.percentile && { label: trend.percentile.label, value: trend.percentile.value_pct },
			limit: trend.limit_pct === null ? null : { label: 'limit', value: trend.limit_pct },
			flagged: trend.flagged,
			zone
		},
		'print',
		COURSE_SIZE
	);
	return renderChartSvg(option, COURSE_SIZE);
}

/** Every chart of a report as SVG text; `onDrawn` is told after each. */
export async function drawReport(
	model: ReportModel,
	onDrawn: (count: number) => Promise<void> = async () => undefined
): Promise<ReportDrawings> {
	const name = namer(model);
	let drawn = 0;
	const each = async <T, R>(items: readonly T[], draw: (item: T) => R): Promise<R[]> => {
		const made: R[] = [];
		for (const item of items) {
			made.push(draw(item));
			drawn += 1;
			await onDrawn(drawn);
		}
		return made;
	};
	const spectra = await each(model.spectra, (spectrum) => spectrumSvg(spectrum, name));
	const waveform = await each(model.waveform === null ? [] : [model.waveform], (one) =>
		waveformSvgs(one, name)
	);
	const trends = await each(model.trends, (trend) => trendSvg(trend, name, model.site.timeZone));
	return { spectra, waveform: waveform.flat(), trends };
}
