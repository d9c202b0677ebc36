import type { ColumnRun } from './column-sums';
import { IntervalGroup, type AggregateSink, type AggregationMember } from './interval-group';

/** 10/12-cycle windows in one 150/180-cycle interval. */
export const WINDOWS_PER_3S = 15;

/**
 * 150/180-cycle intervals out of windows pushed one by one.
 * A window that starts a new train at a ten-minute tick starts a new interval as well; the one that is open is completed
 * with the windows of the new train, so the two overlap (IEC 61000-4-30:2015, 4.5.2, overlap 2, from memory).
 * An interval with a gap between its windows is left out.
 */
export class ThreeSecondGroups {
	/** Intervals left out because windows are missing from them. */
	droppedCount = 0;
	/** Started ones, the older first; two at most while intervals overlap. */
	private readonly open: IntervalGroup[] = [];
	private readonly idle: IntervalGroup[];
	private last: { start_ms: number; end_ms: number; length_s: number } | null = null;

	constructor(
		columns: readonly ColumnRun[],
		private readonly emit: AggregateSink
	) {
		this.idle = [new IntervalGroup(columns), new IntervalGroup(columns)];
	}

	push(window: AggregationMember, row: Float64Array): void {
		const { open } = this;
		if (this.last !== null && !this.adjoins(window, this.last)) this.drop(open.length);
		if (window.resync || open.length === 0) this.start();
		for (const group of open) group.add(window, row);
		this.last = {
			start_ms: window.start_ms,
			end_ms: window.start_ms + 1000 * window.length_s,
			length_s: window.length_s
		};
		const oldest = open[0]!;
		if (oldest.memberCount < WINDOWS_PER_3S) return;
		open.shift();
		const length_s = (oldest.end_ms - oldest.start_ms) / 1000;
		this.emit(oldest.finish('3s', oldest.start_ms, length_s, WINDOWS_PER_3S));
		this.idle.push(oldest);
	}

	/** No more windows will come. */
	finish(): void {
		this.drop(this.open.length);
		this.last = null;
	}

	private start(): void {
		if (this.idle.length === 0) this.drop(1);
		const group = this.idle.pop()!;
		group.clear();
		this.open.push(group);
	}

	private drop(count: number): void {
		this.droppedCount += count;
		this.idle.push(...this.open.splice(0, count));
	}

	private adjoins(
		window: AggregationMember,
		last: { start_ms: number; end_ms: number; length_s: number }
	): boolean {
		const most_ms = 500 * last.length_s;
		const gap_ms = window.start_ms - last.end_ms;
		return gap_ms < most_ms && (window.resync ? window.start_ms > last.start_ms - 1 : gap_ms > -most_ms);
	}
}
