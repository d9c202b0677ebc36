import { emptySeries } from '../interval-series';
import { ORDER_STRIDE, type IntervalSeries } from '../intervals';
import { ClockGroups } from './clock-groups';
import type { ColumnRun } from './column-sums';
import type { Aggregate, AggregateInterval, AggregationMember } from './interval-group';
import { ThreeSecondGroups, WINDOWS_PER_3S } from './three-second-groups';

export interface AggregatedIntervals {
	series: IntervalSeries;
	/** Groups left out because intervals are missing from them. */
	droppedCount: number;
	/** What was left out, for people; null when nothing was. */
	sentence: string | null;
}

const TEN_MINUTES_MS = 600_000;
/** A row of a series: its rms, then its orders. */
const COLUMNS: readonly ColumnRun[] = [{ rule: 'rms', count: 1 + ORDER_STRIDE }];

/** What each kind of aggregate may be made of. */
const MADE_OF: Record<AggregateInterval, readonly IntervalSeries['interval'][]> = {
	'3s': ['window'],
	'10min': ['window', '3s'],
	'2h': ['10min']
};

/**
 * Aggregates a whole series to 150/180 cycles, ten minutes or two hours of the clock by root mean square.
 * series   '3s' from 'window'; '10min' from 'window' or '3s'; '2h' from '10min'
 * returns  aggregates in order of time, by the rules of `createAggregator`; an aggregate that holds a flagged interval is
 *          flagged; frequency is the plain mean
 * source   IEC 61000-4-30:2015, 4.4 to 4.7 (from memory); IEEE Std 519-2014, 4.2 and 4.3
 */
export function aggregateIntervals(series: IntervalSeries, to: AggregateInterval): AggregatedIntervals {
	if (!MADE_OF[to].includes(series.interval))
		throw new Error(`${to} values are not built from ${series.interval} values`);
	const rows: Float64Array[] = [];
	const headers: Omit<Aggregate, 'row' | 'counts'>[] = [];
	const emit = (aggregate: Aggregate) => {
		rows.push(aggregate.row.slice());
		headers.push(aggregate);
	};
	const resyncs = series.starts_ms.map((_, i) => (startsAnew(series, i) ? 1 : 0));
	const groups =
		to === '3s'
			? new ThreeSecondGroups(COLUMNS, emit)
			: new ClockGroups(COLUMNS, to, resyncs.includes(1) ? 'start' : 'end', emit);
	const row = new Float64Array(1 + ORDER_STRIDE);
	for (let i = 0; i < series.starts_ms.length; i++) {
		row[0] = series.rms[i]!;
		row.set(series.subgroups.subarray(i * ORDER_STRIDE, (i + 1) * ORDER_STRIDE), 1);
		groups.push(memberOf(series, i, resyncs[i] === 1), row);
	}
	groups.finish();
	return {
		series: toSeries(series, to, headers, rows),
		droppedCount: groups.droppedCount,
		sentence: droppedSentence(to, groups.droppedCount)
	};
}

/** Whether window i overlaps the one before because a new train of windows starts at the tick. */
function startsAnew(series: IntervalSeries, i: number): boolean {
	if (i === 0 || series.interval !== 'window') return false;
	const start_ms = series.starts_ms[i]!;
	const endBefore_ms = series.starts_ms[i - 1]! + 1000 * series.lengths_s[i - 1]!;
	const offTick_ms = Math.abs(start_ms - TEN_MINUTES_MS * Math.round(start_ms / TEN_MINUTES_MS));
	return offTick_ms < 1 && start_ms < endBefore_ms - 1;
}

function memberOf(series: IntervalSeries, i: number, resync: boolean): AggregationMember {
	return {
		start_ms: series.starts_ms[i]!,
		length_s: series.lengths_s[i]!,
		frequency_Hz: series.frequency_Hz[i]!,
		flagged: series.flagged[i] === 1,
		resync
	};
}

function toSeries(
	like: IntervalSeries,
	interval: AggregateInterval,
	headers: readonly Omit<Aggregate, 'row' | 'counts'>[],
	rows: readonly Float64Array[]
): IntervalSeries {
	const out = emptySeries({ quantity: like.quantity, phase: like.phase, interval }, rows.length);
	headers.forEach((header, g) => {
		out.starts_ms[g] = header.start_ms;
		out.lengths_s[g] = header.length_s;
		out.frequency_Hz[g] = header.frequency_Hz;
		out.flagged[g] = header.flagged ? 1 : 0;
		out.rms[g] = rows[g]![0]!;
		out.subgroups.set(rows[g]!.subarray(1), g * ORDER_STRIDE);
	});
	return out;
}

function droppedSentence(to: AggregateInterval, dropped: number): string | null {
	if (dropped === 0) return null;
	if (to === '3s')
		return `${dropped} incomplete ${dropped === 1 ? 'group' : 'groups'} of fewer than ${WINDOWS_PER_3S} windows left out of the 3 s values.`;
	const word = to === '10min' ? 'ten-minute' : 'two-hour';
	return `${dropped} ${word} ${dropped === 1 ? 'interval' : 'intervals'} of the clock not filled by the capture and left out.`;
}
