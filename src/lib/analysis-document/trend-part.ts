import { aggregateIntervals } from '../harmonics/aggregation/aggregate-intervals';
import { ENGINE_VERSION } from '../harmonics/engine-version';
import { ORDER_STRIDE, type IntervalSeries } from '../harmonics/intervals';
import { trendToIntervalSeries, type TrendMapping } from '../harmonics/trend-intervals';
import { suggestMappings, type MappingSuggestion } from '../recording/channel-suggestion';
import type { Trend } from '../recording/recording';
import { err, ok, type Result } from '../result';
import { suggestionPointOf, type AnalysisRequest } from './analysis-request';
import { levelFields } from './channel-entry';
import type { ChannelEntry, RemarkEntry } from './document-schema';
import { rounded } from './rounded';
import type { CapturePart } from './waveform-part';

/** A log of values per interval as its part of the document; a problem is a sentence. */
export function trendPart(
	trend: Trend,
	request: AnalysisRequest,
	start_ms: number
): Result<CapturePart, string> {
	const point = suggestionPointOf(request);
	const suggestions = suggestMappings(trend, point);
	const mappings = suggestions.flatMap(({ channelIndex, mapping }): TrendMapping[] =>
		mapping ? [{ seriesIndex: channelIndex, ...mapping }] : []
	);
	if (mappings.length === 0)
		return err(
			`${request.files[0]!.name} is a log in which no heading tells quantity and conductor; ` +
				`name the columns as in “U_L1 rms (V)” or “I_L1 h5 (A)” and run the analysis again.`
		);
	const converted = trendToIntervalSeries(trend, mappings, start_ms);
	if (!converted.ok) return err(converted.problem.sentence);
	const { series, sentences } = converted.value;
	const tenMinute = series.map((one) =>
		one.interval === '3s' ? aggregateIntervals(one, '10min').series : one
	);
	const twoHour = tenMinute.map((one) => aggregateIntervals(one, '2h').series);
	const frequency_Hz = meanOf(trend.series.find(({ measure }) => measure.kind === 'frequency')?.values);
	const nominalFrequency_Hz = nominalOf(trend, request, frequency_Hz);
	const { judged } = request;
	if (judged && nominalFrequency_Hz === null)
		return err(
			'The log does not tell its frequency; state it with --nominal-frequency 50 or 60, or in the point file.'
		);
	const all = [...series, ...tenMinute.filter((one, i) => one !== series[i] && one.starts_ms.length > 0)];
	return ok({
		intervals: {
			window: 0,
			threeSecond: series[0]!.interval === '3s' ? series[0]!.starts_ms.length : 0,
			tenMinute: tenMinute[0]!.starts_ms.length,
			flagged: series[0]!.flagged.reduce((sum, flag) => sum + flag, 0),
			twoHour: twoHour[0]!.starts_ms.length
		},
		channels: series.map((one) => trendChannel(one, trend, suggestions, frequency_Hz)),
		...(judged &&
			nominalFrequency_Hz && {
				assessment: judged.judge(
					{ system: point.system, nominalFrequency_Hz, timeZone: request.timeZone },
					all
				)
			}),
		engineVersion: ENGINE_VERSION,
		nominalFrequency_Hz,
		highestOrder: Math.max(0, ...series.flatMap(loggedOrders)) || null,
		phaseReference: null,
		leftOut: suggestions.flatMap(({ channelIndex, mapping, reason }) =>
			mapping ? [] : [{ name: trend.series[channelIndex]!.name, reason }]
		),
		powers: [],
		unbalance: { u2_percent: null, u0_percent: null, i2_percent: null },
		events: null,
		flicker: [],
		remarks: sentences.map((sentence): RemarkEntry => ({
			severity: 'notes',
			code: 'trend-column',
			channel: null,
			sentence
		}))
	});
}

function nominalOf(trend: Trend, request: AnalysisRequest, measured_Hz: number): 50 | 60 | null {
	const stated =
		request.nominalFrequency_Hz ?? request.judged?.facts.nominalFrequency_Hz ?? trend.nominalFrequency_Hz;
	if (stated === 50 || stated === 60) return stated;
	if (Number.isNaN(measured_Hz)) return null;
	return measured_Hz < 55 ? 50 : 60;
}

/** Mean of the values that are there; NaN for none. */
function meanOf(values: Float64Array | undefined): number {
	const present = (values ?? new Float64Array(0)).filter((value) => !Number.isNaN(value));
	return present.reduce((sum, value) => sum + value, 0) / present.length;
}

/** Root of the mean of the squares of the values that are there; NaN for none. */
function rmsOf(values: Float64Array): number {
	return Math.sqrt(meanOf(values.map((value) => value * value)));
}

function loggedOrders({ subgroups }: IntervalSeries): number[] {
	const found = new Set<number>();
	subgroups.forEach((value, at) => {
		if (!Number.isNaN(value) && at % ORDER_STRIDE > 0) found.add(at % ORDER_STRIDE);
	});
	return [...found].sort((a, b) => a - b);
}

/** One quantity of one conductor over all rows of the log; a log does not tell how its orders were grouped. */
function trendChannel(
	series: IntervalSeries,
	trend: Trend,
	suggestions: readonly MappingSuggestion[],
	frequency_Hz: number
): ChannelEntry {
	const { quantity, phase, subgroups } = series;
	const columns = suggestions.filter(
		({ mapping }) => mapping?.quantity === quantity && mapping.phase === phase
	);
	const leading =
		columns.find(({ channelIndex }) => trend.series[channelIndex]!.measure.kind === 'rms') ?? columns[0]!;
	const rms = rmsOf(series.rms);
	const levels = Float64Array.from({ length: ORDER_STRIDE }, (_, order) =>
		rmsOf(subgroups.filter((_, at) => at % ORDER_STRIDE === order))
	);
	return {
		name: trend.series[leading.channelIndex]!.name,
		unit: quantity === 'voltage' ? 'V' : 'A',
		quantity,
		phase,
		rms: rounded(rms),
		dc: null,
		frequency_Hz: rounded(frequency_Hz),
		crestFactor: null,
		...levelFields({
			quantity,
			rms: Number.isNaN(rms) ? levels[1]! : rms,
			components: levels,
			subgroups: levels,
			phases_deg: new Float64Array(ORDER_STRIDE).fill(NaN),
			listed: loggedOrders(series),
			hasSignal: true
		}),
		use: 'point',
		toPrimary: leading.mapping!.toPrimary,
		mapping: leading.reason
	};
}
