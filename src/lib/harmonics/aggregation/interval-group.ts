import { ColumnSums, columnCountOf, type ColumnRun } from './column-sums';

/** What is known of an interval beside its row of values. */
export interface AggregationMember {
	/** Milliseconds since 1970-01-01 UTC. */
	start_ms: number;
	length_s: number;
	/** Hz; NaN = not known. */
	frequency_Hz: number;
	flagged: boolean;
	/** First window of a train that starts anew at a ten-minute tick; it overlaps the window before. */
	resync: boolean;
}

export type AggregateInterval = '3s' | '10min' | '2h';

/** A finished aggregate. `row` and `counts` belong to the aggregator and are written again: copy what is kept. */
export interface Aggregate {
	interval: AggregateInterval;
	start_ms: number;
	length_s: number;
	/** Plain mean over the members. */
	frequency_Hz: number;
	/** Whether any member is flagged. */
	flagged: boolean;
	/** Members (windows; ten-minute intervals for 2 h) that lie in it, with data or without. */
	memberCount: number;
	/** [columns] aggregated values; NaN where too few members held data. */
	row: Float64Array;
	/** [columns] members that held data. */
	counts: Uint32Array;
}

/** Called with every finished aggregate. */
export type AggregateSink = (aggregate: Aggregate) => void;

/**
 * An aggregate stands when at least this share of what it calls for holds data: 15 of 15 windows, 594 of 600 seconds,
 * 12 of 12 ten-minute intervals. It holds for the interval as a whole and for every column by itself.
 * The standards ask for gapless measurement and do not say how much may be missing; this is the product's own rule, and
 * the same share decides whether a day or a week counts as recorded.
 */
export const LEAST_RECORDED_SHARE = 0.99;

/** An interval in the making. */
export class IntervalGroup {
	memberCount = 0;
	start_ms = NaN;
	end_ms = NaN;
	/** Sum of the members' lengths. */
	covered_s = 0;
	private flagged = false;
	private frequencySum = 0;
	private frequencyCount = 0;
	private readonly sums: ColumnSums;
	private readonly row: Float64Array;

	constructor(columns: readonly ColumnRun[]) {
		this.sums = new ColumnSums(columns);
		this.row = new Float64Array(columnCountOf(columns));
	}

	clear(): void {
		this.memberCount = 0;
		this.covered_s = 0;
		this.flagged = false;
		this.frequencySum = 0;
		this.frequencyCount = 0;
		this.sums.clear();
	}

	add(member: AggregationMember, row: Float64Array): void {
		if (this.memberCount === 0) this.start_ms = member.start_ms;
		this.memberCount++;
		this.end_ms = member.start_ms + 1000 * member.length_s;
		this.covered_s += member.length_s;
		if (member.flagged) this.flagged = true;
		if (!Number.isNaN(member.frequency_Hz)) {
			this.frequencySum += member.frequency_Hz;
			this.frequencyCount++;
		}
		this.sums.add(row);
	}

	/** least  members that a column needs */
	finish(interval: AggregateInterval, start_ms: number, length_s: number, least: number): Aggregate {
		this.sums.read(least, this.row);
		return {
			interval,
			start_ms,
			length_s,
			frequency_Hz: this.frequencyCount >= Math.max(1, least) ? this.frequencySum / this.frequencyCount : NaN,
			flagged: this.flagged,
			memberCount: this.memberCount,
			row: this.row,
			counts: this.sums.counts
		};
	}
}
