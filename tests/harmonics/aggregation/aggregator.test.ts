import { describe, expect, it } from 'vitest';
import { aggregateIntervals } from '$lib/harmonics/aggregation/aggregate-intervals';
import { createAggregator } from '$lib/harmonics/aggregation/aggregator';
import type { ColumnRun } from '$lib/harmonics/aggregation/column-sums';
import type { AggregateInterval } from '$lib/harmonics/aggregation/interval-group';
import { emptySeries } from '$lib/harmonics/interval-series';
import { ORDER_STRIDE } from '$lib/harmonics/intervals';
import { rootMeanSquare } from '$lib/numerics/stats/root-mean-square';

// Intervals, their alignment and their overlap: IEC 61000-4-30:2015, 4.4 to 4.7 (from memory).
const TICK = Date.UTC(2024, 2, 5, 10, 0, 0);
const WINDOW_MS = 200;

interface Window {
	start_ms: number;
	length_s: number;
	resync: boolean;
	flagged?: boolean;
	frequency_Hz?: number;
	row?: number[];
}

interface Kept {
	interval: AggregateInterval;
	start_ms: number;
	length_s: number;
	frequency_Hz: number;
	flagged: boolean;
	memberCount: number;
	row: number[];
	counts: number[];
}

const RMS: ColumnRun[] = [{ rule: 'rms', count: 1 }];

/**
 * Windows of one length from a moment on, adjoining; at every tick of ten minutes the window across it is finished and
 * a new train starts at the tick.
 */
function trains(from_ms: number, to_ms: number, length_ms = WINDOW_MS): Window[] {
	const windows: Window[] = [];
	let start_ms = from_ms;
	let resync = false;
	while (start_ms + length_ms <= to_ms + 1e-3) {
		windows.push({ start_ms, length_s: length_ms / 1000, resync });
		const tick_ms = 600_000 * (Math.floor(start_ms / 600_000) + 1);
		resync = start_ms + length_ms >= tick_ms - 1e-3;
		start_ms = resync ? tick_ms : start_ms + length_ms;
	}
	return windows;
}

function aggregate(windows: Window[], runs = RMS, resynchronised = true) {
	const kept: Kept[] = [];
	const aggregator = createAggregator({
		columns: runs,
		resynchronised,
		onAggregate: ({ row, counts, ...rest }) => kept.push({ ...rest, row: [...row], counts: [...counts] })
	});
	windows.forEach((window, i) =>
		aggregator.push(
			{ frequency_Hz: window.frequency_Hz ?? 50, flagged: window.flagged ?? false, ...window },
			Float64Array.from(window.row ?? [i])
		)
	);
	aggregator.finish();
	const of = (interval: AggregateInterval) => kept.filter((one) => one.interval === interval);
	return { threeSecond: of('3s'), tenMinute: of('10min'), twoHour: of('2h'), dropped: aggregator.dropped() };
}

const meanSquare = (from: number, count: number) =>
	rootMeanSquare(Float64Array.from({ length: count }, (_, i) => from + i));

describe('150/180-cycle intervals', () => {
	it('start anew at a tick while the open one is completed with the new train: they overlap', () => {
		// Windows every 0.21 s from 2.5 s before the tick: the twelfth straddles it and ends 20 ms after; it is window 11.
		const { threeSecond } = aggregate(trains(TICK - 2500, TICK + 10_000, 210));
		const [across, first, second] = threeSecond;
		expect(across!.start_ms).toBe(TICK - 2500);
		// Twelve windows of the old train and three of the new.
		expect(across!.row[0]).toBeCloseTo(meanSquare(0, 15), 12);
		expect(across!.length_s).toBeCloseTo(2.5 + 0.63, 9);
		expect(first!.start_ms).toBe(TICK);
		expect(first!.row[0]).toBeCloseTo(meanSquare(12, 15), 12);
		expect(second!.start_ms).toBeCloseTo(TICK + 15 * 210, 6);
		expect(second!.row[0]).toBeCloseTo(meanSquare(27, 15), 12);
	});

	it('are counted as left out when the record ends or a gap comes', () => {
		const windows = [...trains(TICK, TICK + 4000), ...trains(TICK + 60_000, TICK + 64_000)];
		const { threeSecond, dropped } = aggregate(windows);
		expect(threeSecond.map((one) => one.start_ms - TICK)).toEqual([0, 60_000]);
		expect(dropped['3s']).toBe(2);
	});
});

describe('ten-minute intervals', () => {
	it('take the window across the tick into the interval before, where trains start anew', () => {
		const windows = trains(TICK - 600_000, TICK + 600_000, 201.3);
		const { tenMinute } = aggregate(windows);
		const next = windows.findIndex((window) => window.start_ms === TICK);
		expect(windows[next - 1]!.start_ms + 201.3).toBeGreaterThan(TICK);
		expect(tenMinute.map((one) => one.start_ms)).toEqual([TICK - 600_000, TICK]);
		expect(tenMinute[0]!.memberCount).toBe(next);
		expect(tenMinute[0]!.row[0]! / meanSquare(0, next) - 1).toBeCloseTo(0, 12);
		expect(tenMinute[1]!.row[0]! / meanSquare(next, windows.length - next) - 1).toBeCloseTo(0, 12);
	});

	it('take the windows whose end lies inside, where trains run through', () => {
		const windows = Array.from({ length: 6200 }, (_, i) => ({
			start_ms: TICK - 600_000 + 201.3 * i,
			length_s: 0.2013,
			resync: false
		}));
		const { tenMinute } = aggregate(windows, RMS, false);
		const first = windows.findIndex((window) => window.start_ms + 201.3 > TICK);
		expect(tenMinute.map((one) => one.start_ms)).toEqual([TICK - 600_000, TICK]);
		expect(tenMinute[0]!.memberCount).toBe(first);
	});

	it('stand with 99 % of their time recorded and not with less', () => {
		const whole = trains(TICK, TICK + 600_000);
		const without = (count: number) => [...whole.slice(0, 1000), ...whole.slice(1000 + count)];
		expect(aggregate(without(30)).tenMinute).toHaveLength(1);
		const short = aggregate(without(31));
		expect(short.tenMinute).toEqual([]);
		expect(short.dropped['10min']).toBe(1);
	});

	it('hold a column with 99 % of its windows, and tell how many it had; absent is not zero', () => {
		const runs: ColumnRun[] = [
			{ rule: 'rms', count: 2 },
			{ rule: 'mean', count: 1 }
		];
		const windows = trains(TICK, TICK + 600_000).map((window, i) => ({
			...window,
			row: [i < 30 ? NaN : 2, i < 31 ? NaN : 2, i < 30 ? NaN : -2]
		}));
		const [only] = aggregate(windows, runs).tenMinute;
		expect(only!.row[0]).toBeCloseTo(2, 12);
		expect(only!.row[1]).toBeNaN();
		expect(only!.row[2]).toBeCloseTo(-2, 12);
		expect(only!.counts).toEqual([2970, 2969, 2970]);
	});

	it('are the same whether three-second groups overlap or not: windows count, each once', () => {
		const windows = trains(TICK - 300_000, TICK + 900_000, 199.7);
		const { tenMinute } = aggregate(windows);
		expect(tenMinute.map((one) => one.start_ms)).toEqual([TICK]);
		expect(tenMinute[0]!.memberCount).toBe(Math.ceil(600_000 / 199.7));
	});
});

describe('two-hour intervals', () => {
	const step_ms = 10_000;
	const long = (hours: number) => trains(TICK, TICK + hours * 3_600_000, step_ms);

	it('stand on even hours of UTC and are the root mean square of twelve ten-minute values', () => {
		const { tenMinute, twoHour } = aggregate(long(5));
		expect(twoHour.map((one) => [one.start_ms - TICK, one.length_s, one.memberCount])).toEqual([
			[0, 7200, 12],
			[7_200_000, 7200, 12]
		]);
		const second = Float64Array.from(tenMinute.slice(12, 24), (one) => one.row[0]!);
		expect(twoHour[1]!.row[0]! / rootMeanSquare(second) - 1).toBeCloseTo(0, 12);
	});

	it('need all twelve', () => {
		const windows = long(4).filter((w) => w.start_ms < TICK + 3_600_000 || w.start_ms >= TICK + 4_200_000);
		const { twoHour, dropped } = aggregate(windows);
		expect(twoHour.map((one) => one.start_ms)).toEqual([TICK + 7_200_000]);
		expect(dropped['2h']).toBe(1);
	});

	it('come from a ten-minute series too', () => {
		const series = emptySeries({ quantity: 'voltage', phase: 'L1', interval: '10min' }, 13);
		for (let i = 0; i < 13; i++) {
			series.starts_ms[i] = TICK + i * 600_000;
			series.lengths_s[i] = 600;
			series.rms[i] = 230;
			series.subgroups[i * ORDER_STRIDE + 5] = i < 11 ? 3 : 10;
		}
		series.flagged[3] = 1;
		const { series: out, droppedCount, sentence } = aggregateIntervals(series, '2h');
		expect([...out.starts_ms]).toEqual([TICK]);
		expect(out.interval).toBe('2h');
		expect(out.subgroups[5]).toBeCloseTo(Math.sqrt((11 * 9 + 100) / 12), 12);
		expect([...out.flagged]).toEqual([1]);
		expect(droppedCount).toBe(1);
		expect(sentence).toContain('two-hour interval ');
	});
});

describe('rules of columns', () => {
	// Fourteen windows at 3 % and one at 10 %: 3.88158043414 %, not the mean of 3.46666666667 % (IEC 61000-4-30, 4.5, and
	// IEEE Std 519, 4.2: square root of the mean of the squares; derived from the definition).
	const runs: ColumnRun[] = [
		{ rule: 'rms', count: 2 },
		{ rule: 'mean', count: 1 },
		{ rule: 'max', count: 1 },
		{ rule: 'min', count: 1 }
	];
	const windows = trains(TICK, TICK + 3000).map((window, i) => {
		const value = i === 14 ? 10 : 3;
		return {
			...window,
			frequency_Hz: 50 + i / 10,
			flagged: i === 6,
			row: [value, -value, -value, -value, value]
		};
	});

	it('rms of squares, mean with sign, extremes with sign', () => {
		const [only] = aggregate(windows, runs).threeSecond;
		const [rms, rmsOfNegative, mean, max, min] = only!.row;
		expect(Math.abs(rms! - 3.88158043414)).toBeLessThan(1e-10);
		expect(rmsOfNegative).toBe(rms);
		expect(Math.abs(mean! + 3.46666666667)).toBeLessThan(1e-10);
		expect([max, min]).toEqual([-3, 3]);
		expect(only).toMatchObject({ flagged: true, memberCount: 15 });
		expect(only!.frequency_Hz).toBeCloseTo(50.7, 12);
	});

	it('a value of no window is no data, whatever the rule', () => {
		const empty = windows.map((window) => ({ ...window, frequency_Hz: NaN, row: [NaN, 1, NaN, NaN, NaN] }));
		const [only] = aggregate(empty, runs).threeSecond;
		expect(only!.row).toEqual([NaN, 1, NaN, NaN, NaN]);
		expect(only!.frequency_Hz).toBeNaN();
	});

	it('a group starts from nothing: what one held does not reach the next', () => {
		const two = [...windows, ...trains(TICK + 3000, TICK + 6000)].map((window, i) => ({
			...window,
			flagged: i === 6,
			row: i < 15 ? [9, 9, 9, 9, -9] : [1, 1, 1, 1, 1]
		}));
		const [, second] = aggregate(two, runs).threeSecond;
		expect(second!.row).toEqual([1, 1, 1, 1, 1]);
		expect(second!.flagged).toBe(false);
	});
});

describe('a whole series of windows', () => {
	it('gives the same figures as the stream, a new train at the tick included', () => {
		const windows = trains(TICK - 606_000, TICK + 606_000, 200.7);
		const series = emptySeries({ quantity: 'voltage', phase: 'L1', interval: 'window' }, windows.length);
		windows.forEach((window, i) => {
			series.starts_ms[i] = window.start_ms;
			series.lengths_s[i] = window.length_s;
			series.rms[i] = i;
			series.frequency_Hz[i] = 50;
		});
		const stream = aggregate(windows);
		for (const [interval, kept] of [
			['3s', stream.threeSecond],
			['10min', stream.tenMinute]
		] as const) {
			const { series: out, droppedCount } = aggregateIntervals(series, interval);
			expect([...out.starts_ms]).toEqual(kept.map((one) => one.start_ms));
			expect([...out.rms]).toEqual(kept.map((one) => one.row[0]));
			expect(droppedCount).toBe(stream.dropped[interval]);
		}
	});
});
