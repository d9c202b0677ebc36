import type { EventThresholds, VoltageEvent, VoltageEventKind } from './voltage-event';

/** The latest Urms(1/2) of every channel. */
export interface LatestValues {
	/** [channels] percent of the reference; NaN = none. */
	levels_pct: Float64Array;
	/** [channels] start of the value. */
	starts_s: Float64Array;
	/** [channels] one cycle. */
	cycles_s: Float64Array;
}

/** Looks for one kind of event over all channels. */
export class EventWatch {
	open: VoltageEvent | null = null;
	private readonly threshold_pct: number;
	private readonly return_pct: number;
	/** 1: beyond is above the threshold (swell); −1: below it. */
	private readonly direction: 1 | -1;
	/** [channels] whether the channel has gone beyond and not returned. */
	private readonly isOut: Uint8Array;

	constructor(
		private readonly kind: VoltageEventKind,
		thresholds: EventThresholds,
		private readonly latest: LatestValues
	) {
		this.direction = kind === 'swell' ? 1 : -1;
		this.threshold_pct = thresholds[`${kind}_pct`];
		this.return_pct = this.threshold_pct - this.direction * thresholds.hysteresis_pct;
		this.isOut = new Uint8Array(latest.levels_pct.length);
	}

	/** A channel's latest value is new; returns the event that it ended, if any. */
	step(channel: number): VoltageEvent | null {
		const { latest, isOut } = this;
		const level_pct = latest.levels_pct[channel]!;
		const wasOut = isOut[channel] === 1;
		if (this.isBeyond(level_pct)) isOut[channel] = 1;
		else if (this.hasReturned(level_pct)) isOut[channel] = 0;
		if (this.open === null) {
			if (isOut[channel] === 1 && this.begins(level_pct, latest.starts_s[channel]!)) this.begin(channel);
			return null;
		}
		const at_s = latest.starts_s[channel]!;
		if (this.ends(level_pct, at_s)) {
			if (wasOut) this.recordOf(this.open, channel).end_s = at_s;
			return this.close(at_s, at_s + latest.cycles_s[channel]! / 2, false);
		}
		this.extend(this.open, channel, wasOut);
		return null;
	}

	/** The record stops here; returns the event that stays open, if any. */
	stop(): VoltageEvent | null {
		this.isOut.fill(0);
		if (this.open === null) return null;
		return this.close(this.open.end_s, this.open.end_s, true);
	}

	private isBeyond(level_pct: number): boolean {
		return this.direction * (level_pct - this.threshold_pct) > 0;
	}

	private hasReturned(level_pct: number): boolean {
		return this.direction * (level_pct - this.return_pct) <= 0;
	}

	/** A dip or swell begins on any channel, an interruption when it has reached all. */
	private begins(level_pct: number, at_s: number): boolean {
		if (!this.isBeyond(level_pct)) return false;
		return this.kind !== 'interruption' || this.everyKnown(at_s, (other_pct) => this.isBeyond(other_pct));
	}

	/** A dip or swell ends when every channel has returned, an interruption when any has. */
	private ends(level_pct: number, at_s: number): boolean {
		if (!this.hasReturned(level_pct)) return false;
		return this.kind === 'interruption' || this.everyKnown(at_s, (other_pct) => this.hasReturned(other_pct));
	}

	/** Whether all channels with a value of about now pass; one that has gone silent has no say. */
	private everyKnown(at_s: number, passes: (level_pct: number) => boolean): boolean {
		const { levels_pct } = this.latest;
		for (let c = 0; c < levels_pct.length; c++)
			if (this.isKnown(c, at_s) && !passes(levels_pct[c]!)) return false;
		return true;
	}

	private isKnown(channel: number, at_s: number): boolean {
		const { levels_pct, starts_s, cycles_s } = this.latest;
		return !Number.isNaN(levels_pct[channel]!) && at_s - starts_s[channel]! < 2 * cycles_s[channel]!;
	}

	private begin(channel: number): void {
		const { latest } = this;
		const event: VoltageEvent = {
			kind: this.kind,
			start_s: latest.starts_s[channel]!,
			end_s: NaN,
			duration_s: NaN,
			touchedUntil_s: NaN,
			extreme_pct: latest.levels_pct[channel]!,
			depth_pct: NaN,
			channels: [],
			holdsInterruption: false,
			isOpen: true,
			hasGap: false
		};
		this.open = event;
		for (let c = 0; c < this.isOut.length; c++)
			if (this.isOut[c] === 1 && this.isKnown(c, event.start_s)) this.extend(event, c, true);
	}

	private extend(event: VoltageEvent, channel: number, wasOut: boolean): void {
		const level_pct = this.latest.levels_pct[channel]!;
		const end_s = this.latest.starts_s[channel]! + this.latest.cycles_s[channel]!;
		event.extreme_pct = this.further(event.extreme_pct, level_pct);
		event.end_s = Number.isNaN(event.end_s) ? end_s : Math.max(event.end_s, end_s);
		event.touchedUntil_s = event.end_s;
		event.duration_s = event.end_s - event.start_s;
		event.depth_pct = Math.abs(100 - event.extreme_pct);
		if (this.isOut[channel] === 1) {
			const record = this.recordOf(event, channel);
			record.extreme_pct = this.further(record.extreme_pct, level_pct);
			record.end_s = end_s;
		} else if (wasOut) this.recordOf(event, channel).end_s = this.latest.starts_s[channel]!;
	}

	private recordOf(event: VoltageEvent, channel: number) {
		const known = event.channels.find((c) => c.channel === channel);
		if (known) return known;
		const made = {
			channel,
			start_s: this.latest.starts_s[channel]!,
			end_s: NaN,
			extreme_pct: this.latest.levels_pct[channel]!
		};
		event.channels.push(made);
		event.channels.sort((a, b) => a.channel - b.channel);
		return made;
	}

	private further(a_pct: number, b_pct: number): number {
		return this.direction === 1 ? Math.max(a_pct, b_pct) : Math.min(a_pct, b_pct);
	}

	private close(end_s: number, touchedUntil_s: number, isOpen: boolean): VoltageEvent {
		const event = this.open!;
		this.open = null;
		return { ...event, end_s, touchedUntil_s, duration_s: end_s - event.start_s, isOpen };
	}
}
