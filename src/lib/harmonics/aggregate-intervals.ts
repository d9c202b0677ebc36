import { emptySeries } from './interval-series';
import { ORDER_STRIDE, type IntervalSeries } from './intervals';

/** 10/12-cycle windows in one 150/180-cycle interval. */
const WINDOWS_PER_3S = 15;
const TEN_MINUTES_MS = 600_000;
/** A ten-minute interval counts as full when no more than two windows at its ends are missing. */
const MOST_MISSING_S = 0.5;

export interface AggregatedIntervals {
	series: IntervalSeries;
	/** Groups left out because intervals are missing from them. */
	droppedCount: number;
	/** What was left out, for people; null when nothing was. */
	sentence: string | null;
}

/**
 * Aggregates to 150/180 cycles or to ten minutes of the clock by root mean square.
 * series   '3s' from 'window'; '10min' from 'window' or '3s'
 * returns  aggregates in order of time; an order missing from one member is missing from the aggregate; an aggregate that
 *          holds a flagged interval is flagged; frequency is the plain mean
 * source   IEC 61000-4-30:2015, 4.4 to 4.7 (from memory): ten-minute intervals stand on the ticks of UTC and take the
 *          windows whose end lies inside; IEEE Std 519-2014, 4.2 and 4.3
 */
export function aggregateIntervals(series: IntervalSeries, to: '3s' | '10min'): AggregatedIntervals {
	if (to === '3s' && series.interval !== 'window') {
		throw new Error(`3 s intervals are built from windows, not from ${series.interval}`);
	}
	if (to === '10min' && series.interval === '10min') {
		throw new Error('the series is in ten-minute intervals already');
	}
	return to === '3s' ? aggregateToThreeSeconds(series) : aggregateToTenMinutes(series);
}

interface Group {
	from: number;
	/** exclusive */
	to: number;
	start_ms: number;
	length_s: number;
}

function aggregateToThreeSeconds(series: IntervalSeries): AggregatedIntervals {
	const groups: Group[] = [];
	let dropped = 0;
	let from = 0;
	const count = series.starts_ms.length;
	for (let i = 1; i <= count; i++) {
		const full = i - from === WINDOWS_PER_3S;
		if (full) {
			groups.push({ from, to: i, start_ms: series.starts_ms[from]!, length_s: spanned_s(series, from, i) });
			from = i;
		} else if (i === count || !adjoins(series, i)) {
			if (i > from) dropped++;
			from = i;
		}
	}
	const sentence =
		dropped > 0
			? `${dropped} incomplete ${dropped === 1 ? 'group' : 'groups'} of fewer than ${WINDOWS_PER_3S} windows left out of the 3 s values.`
			: null;
	return { series: combine(series, '3s', groups), droppedCount: dropped, sentence };
}

function aggregateToTenMinutes(series: IntervalSeries): AggregatedIntervals {
	const groups: Group[] = [];
	let dropped = 0;
	const count = series.starts_ms.length;
	let from = 0;
	while (from < count) {
		const tick = tickOf(series, from);
		let to = from + 1;
		while (to < count && tickOf(series, to) === tick) to++;
		let covered_s = 0;
		for (let i = from; i < to; i++) covered_s += series.lengths_s[i]!;
		const slack_s = Math.max(MOST_MISSING_S, 1.1 * series.lengths_s[from]!);
		if (covered_s >= TEN_MINUTES_MS / 1000 - slack_s) {
			groups.push({ from, to, start_ms: tick * TEN_MINUTES_MS, length_s: TEN_MINUTES_MS / 1000 });
		} else {
			dropped++;
		}
		from = to;
	}
	const sentence =
		dropped > 0
			? `${dropped} ten-minute ${dropped === 1 ? 'interval' : 'intervals'} of the clock not filled by the capture and left out.`
			: null;
	return { series: combine(series, '10min', groups), droppedCount: dropped, sentence };
}

/** Number of the ten-minute interval in which member i ends; an end on the tick belongs to the interval before. */
function tickOf(series: IntervalSeries, i: number): number {
	const end_ms = series.starts_ms[i]! + 1000 * series.lengths_s[i]!;
	return Math.ceil((end_ms - 0.5) / TEN_MINUTES_MS) - 1;
}

function adjoins(series: IntervalSeries, i: number): boolean {
	const gap_s = (series.starts_ms[i]! - series.starts_ms[i - 1]!) / 1000 - series.lengths_s[i - 1]!;
	return Math.abs(gap_s) < series.lengths_s[i - 1]! / 2;
}

function spanned_s(series: IntervalSeries, from: number, to: number): number {
	return (series.starts_ms[to - 1]! - series.starts_ms[from]!) / 1000 + series.lengths_s[to - 1]!;
}

function combine(series: IntervalSeries, interval: '3s' | '10min', groups: readonly Group[]): IntervalSeries {
	const out = emptySeries({ quantity: series.quantity, phase: series.phase, interval }, groups.length);
	groups.forEach((group, g) => {
		out.starts_ms[g] = group.start_ms;
		out.lengths_s[g] = group.length_s;
		out.rms[g] = stridedRms(series.rms, group, 1, 0);
		out.frequency_Hz[g] = meanOf(series.frequency_Hz, group);
		for (let order = 0; order < ORDER_STRIDE; order++) {
			out.subgroups[g * ORDER_STRIDE + order] = stridedRms(series.subgroups, group, ORDER_STRIDE, order);
		}
		for (let i = group.from; i < group.to; i++) if (series.flagged[i]) out.flagged[g] = 1;
	});
	return out;
}

function stridedRms(values: Float64Array, group: Group, stride: number, offset: number): number {
	let sum = 0;
	for (let i = group.from; i < group.to; i++) sum += values[i * stride + offset]! ** 2;
	return Math.sqrt(sum / (group.to - group.from));
}

function meanOf(values: Float64Array, group: Group): number {
	let sum = 0;
	for (let i = group.from; i < group.to; i++) sum += values[i]!;
	return sum / (group.to - group.from);
}
