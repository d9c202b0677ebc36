import { describe, expect, it } from 'vitest';
import { aggregateIntervals } from '$lib/harmonics/aggregation/aggregate-intervals';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { emptySeries, toWindowSeries } from '$lib/harmonics/interval-series';
import { ORDER_STRIDE, type IntervalKind, type IntervalSeries } from '$lib/harmonics/intervals';
import { trendToIntervalSeries } from '$lib/harmonics/trend-intervals';
import type { Trend, TrendSeries } from '$lib/recording/recording';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';

// Aggregation of IEC 61000-4-30:2015, 4.4 to 4.7 (clauses from memory).
const TICK = Date.UTC(2024, 2, 5, 10, 0, 0);

function series(interval: IntervalKind, count: number, length_s: number, start_ms: number): IntervalSeries {
	const out = emptySeries({ quantity: 'current', phase: 'L1', interval }, count);
	for (let i = 0; i < count; i++) {
		out.starts_ms[i] = start_ms + 1000 * length_s * i;
		out.lengths_s[i] = length_s;
		out.rms[i] = 100;
		out.frequency_Hz[i] = 50;
		for (let order = 0; order <= 40; order++) out.subgroups[i * ORDER_STRIDE + order] = 3;
	}
	return out;
}

describe('three-second values', () => {
	it('are the root mean square of fifteen windows: fourteen times 3 and once 10 give 3.88158043414', () => {
		const windows = series('window', 15, 0.2, TICK);
		windows.subgroups[14 * ORDER_STRIDE + 5] = 10;
		const { series: out, sentence } = aggregateIntervals(windows, '3s');
		expect(out.interval).toBe('3s');
		expect(Math.abs(out.subgroups[5]! - 3.88158043414)).toBeLessThan(1e-10);
		expect(Math.abs(out.subgroups[7]! - 3)).toBeLessThan(1e-12);
		expect(out.subgroups[45]).toBeNaN();
		expect(Math.abs(out.lengths_s[0]! - 3)).toBeLessThan(1e-9);
		expect(sentence).toBeNull();
	});

	it('leave out a group that is not full, and say so', () => {
		const { series: out, droppedCount, sentence } = aggregateIntervals(series('window', 49, 0.2, TICK), '3s');
		expect(out.rms).toHaveLength(3);
		expect(droppedCount).toBe(1);
		expect(sentence).toContain('1 incomplete group');
	});

	it('do not reach across a gap', () => {
		const windows = series('window', 40, 0.2, TICK);
		for (let i = 20; i < 40; i++) windows.starts_ms[i]! += 60_000;
		const { series: out, droppedCount } = aggregateIntervals(windows, '3s');
		expect([...out.starts_ms]).toEqual([TICK, windows.starts_ms[20]]);
		expect(droppedCount).toBe(2);
	});

	it('carry flags and missing values of any member', () => {
		const windows = series('window', 30, 0.2, TICK);
		windows.flagged[17] = 1;
		windows.rms[3] = NaN;
		windows.subgroups[3 * ORDER_STRIDE + 5] = NaN;
		const { series: out } = aggregateIntervals(windows, '3s');
		expect([...out.flagged]).toEqual([0, 1]);
		expect(out.rms[0]).toBeNaN();
		expect(out.subgroups[5]).toBeNaN();
		expect(out.subgroups[ORDER_STRIDE + 5]).toBeCloseTo(3, 12);
	});
});

describe('ten-minute values', () => {
	it('stand on the ticks of the clock and take the windows that end inside', () => {
		// Starts 100.1 s before the tick: the first partial interval is left out, the second is full, the last is not.
		const windows = series('window', 4000, 0.2, TICK - 100_100);
		const { series: out, droppedCount, sentence } = aggregateIntervals(windows, '10min');
		expect([...out.starts_ms]).toEqual([TICK]);
		expect(out.lengths_s[0]).toBe(600);
		expect(droppedCount).toBe(2);
		expect(sentence).toContain('2 ten-minute intervals');
	});

	it('come from three-second values too', () => {
		const values = series('3s', 400, 3, TICK);
		values.subgroups[10 * ORDER_STRIDE + 5] = 30;
		values.flagged[250] = 1;
		const { series: out } = aggregateIntervals(values, '10min');
		expect([...out.starts_ms]).toEqual([TICK, TICK + 600_000]);
		expect(Math.abs(out.subgroups[5]! - Math.sqrt((199 * 9 + 900) / 200))).toBeLessThan(1e-12);
		expect([...out.flagged]).toEqual([0, 1]);
	});

	it('are not built from ten-minute values', () => {
		expect(() => aggregateIntervals(series('10min', 3, 600, TICK), '10min')).toThrow();
		expect(() => aggregateIntervals(series('3s', 3, 3, TICK), '3s')).toThrow();
	});
});

describe('windows of an analysis', () => {
	it('become series on the time of the capture', () => {
		const recording = synthesiseRecording({
			frequency_Hz: 50,
			samplingRate_Hz: 6400,
			duration_s: 4,
			seed: 1,
			channels: [
				{
					name: 'I1',
					quantity: 'current',
					phase: 'L1',
					fundamental_rms: 40,
					fundamentalPhase_deg: 0,
					harmonics: [{ order: 5, magnitude_pctOfFundamental: 10, phase_deg: 0 }]
				}
			]
		});
		const outcome = analyseWaveform(
			recording,
			[{ channelIndex: 0, quantity: 'current', phase: 'L1', toPrimary: 10 }],
			{ nominalFrequency_Hz: 50 }
		);
		if (!outcome.ok) throw new Error(outcome.problem.sentence);
		const [windows] = toWindowSeries(outcome.value, TICK);
		expect(windows!.starts_ms).toHaveLength(19);
		expect(windows!.starts_ms[0]! - TICK).toBeLessThan(10);
		const { series: out } = aggregateIntervals(windows!, '3s');
		expect(Math.abs(out.subgroups[5]! - 40)).toBeLessThan(4e-3);
	});
});

describe('trend logs', () => {
	function trend(columns: Partial<TrendSeries>[], interval_s = 600): Trend {
		return {
			kind: 'trend',
			format: 'delimited text',
			variant: '',
			stationName: '',
			recorderName: '',
			nominalFrequency_Hz: 50,
			start: { local: '2024-03-05T10:00:00', utcOffset_min: 0 },
			interval_s,
			intervalStarts_s: Float64Array.of(0, interval_s, 2 * interval_s),
			flagged: Uint8Array.of(0, 1, 0),
			series: columns.map((column) => ({
				name: 'column',
				quantity: 'current',
				phaseHint: null,
				measure: { kind: 'rms' },
				unit: 'A',
				values: Float64Array.of(1, 2, NaN),
				...column
			})),
			remarks: []
		};
	}
	const map = (count: number) =>
		Array.from({ length: count }, (_, seriesIndex) => ({
			seriesIndex,
			quantity: 'current' as const,
			phase: 'L2' as const,
			toPrimary: 20
		}));

	it('become absolute primary values; percentages take the logged order 1', () => {
		const outcome = trendToIntervalSeries(
			trend([
				{ measure: { kind: 'order', order: 1 }, values: Float64Array.of(4, 5, NaN) },
				{
					measure: { kind: 'order', order: 5 },
					unit: 'percent-of-fundamental',
					values: Float64Array.of(10, 20, 30)
				}
			]),
			map(2),
			TICK
		);
		if (!outcome.ok) throw new Error(outcome.problem.sentence);
		const out = outcome.value.series[0]!;
		expect(out.interval).toBe('10min');
		expect([...out.starts_ms]).toEqual([TICK, TICK + 600_000, TICK + 1_200_000]);
		expect([out.subgroups[1], out.subgroups[5], out.subgroups[ORDER_STRIDE + 5]]).toEqual([80, 8, 20]);
		expect(out.subgroups[2 * ORDER_STRIDE + 5]).toBeNaN();
		expect(out.subgroups[7]).toBeNaN();
		expect([...out.flagged]).toEqual([0, 1, 0]);
	});

	it('derive order 1 from the rms where only percentages are logged, and say so', () => {
		const outcome = trendToIntervalSeries(
			trend([
				{ values: Float64Array.of(5, 5, 5) },
				{
					measure: { kind: 'order', order: 3 },
					unit: 'percent-of-fundamental',
					values: Float64Array.of(75, 0, NaN)
				}
			]),
			map(2),
			TICK
		);
		if (!outcome.ok) throw new Error(outcome.problem.sentence);
		const out = outcome.value.series[0]!;
		// rms 100 A, 75 % third: I1 = 100/1.25 = 80, I3 = 60.
		expect([out.subgroups[1], out.subgroups[3], out.subgroups[ORDER_STRIDE + 1]]).toEqual([80, 60, 100]);
		expect(out.subgroups[2 * ORDER_STRIDE + 1]).toBeNaN();
		expect(outcome.value.sentences.join()).toContain('derived from the rms');
	});

	it('leave percentages without any base as no data, and say so', () => {
		const outcome = trendToIntervalSeries(
			trend([{ measure: { kind: 'order', order: 3 }, unit: 'percent-of-fundamental' }]),
			map(1),
			TICK
		);
		if (!outcome.ok) throw new Error(outcome.problem.sentence);
		expect(outcome.value.series[0]!.subgroups[3]).toBeNaN();
		expect(outcome.value.sentences[0]).toContain('no data');
	});

	it('refuse a spacing that no statistic uses', () => {
		const outcome = trendToIntervalSeries(trend([{}], 30), map(1), TICK);
		expect(outcome).toMatchObject({ ok: false, problem: { code: 'interval-not-usable' } });
	});
});
