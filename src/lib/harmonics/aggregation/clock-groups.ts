import type { ColumnRun } from './column-sums';
import {
	IntervalGroup,
	LEAST_RECORDED_SHARE,
	type AggregateSink,
	type AggregationMember
} from './interval-group';

/** Doubles of this size resolve a quarter of a microsecond; half a hundredth of a millisecond hides their rounding. */
const ROUNDING_MS = 0.005;

/**
 * Intervals that stand on the ticks of UTC, out of members pushed in order of time.
 * A member belongs to the interval in which it ends, or, where the train of windows starts anew at the ticks, to the one
 * in which it starts: the window across the tick then goes with the interval before, and nothing is counted twice.
 * source  IEC 61000-4-30:2015, 4.5.3 and 4.5.4 (from memory)
 */
export class ClockGroups {
	/** Intervals left out because too little of them was recorded. */
	droppedCount = 0;
	private readonly group: IntervalGroup;
	private tick = NaN;
	private readonly length_ms: number;

	/** by  which of its ends puts a member into an interval */
	constructor(
		columns: readonly ColumnRun[],
		private readonly interval: '10min' | '2h',
		private readonly by: 'start' | 'end',
		private readonly emit: AggregateSink
	) {
		this.group = new IntervalGroup(columns);
		this.length_ms = interval === '10min' ? 600_000 : 7_200_000;
	}

	push(member: AggregationMember, row: Float64Array): void {
		const tick = this.tickOf(member);
		if (tick !== this.tick) {
			this.close();
			this.tick = tick;
		}
		this.group.add(member, row);
	}

	/** No more members will come. */
	finish(): void {
		this.close();
		this.tick = NaN;
	}

	private close(): void {
		const { group, length_ms } = this;
		if (group.memberCount === 0) return;
		const length_s = length_ms / 1000;
		const needed = (LEAST_RECORDED_SHARE * length_s * group.memberCount) / group.covered_s;
		const least = Math.ceil(needed - 1e-6);
		if (group.memberCount >= least)
			this.emit(group.finish(this.interval, this.tick * length_ms, length_s, least));
		else this.droppedCount++;
		group.clear();
	}

	private tickOf(member: AggregationMember): number {
		const { length_ms } = this;
		if (this.by === 'start') {
			if (member.resync && length_ms === 600_000) return Math.round(member.start_ms / length_ms);
			return Math.floor((member.start_ms + ROUNDING_MS) / length_ms);
		}
		const end_ms = member.start_ms + 1000 * member.length_s;
		return Math.ceil((end_ms - 0.5) / length_ms) - 1;
	}
}
