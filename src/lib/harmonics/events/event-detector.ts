import { EventWatch, type LatestValues } from './event-watch';
import type { HalfCycles } from './half-cycle-rms';
import { USUAL_THRESHOLDS, type EventThresholds, type VoltageEvent } from './voltage-event';

export interface EventDetectorSetup {
	/** [channels] declared input voltage, 100 %, in the unit of the values. */
	nominals: readonly number[];
	thresholds?: EventThresholds;
	/** Refers dips and swells to a sliding reference (medium and high voltage); interruptions stay with the nominal. */
	hasSlidingReference?: boolean;
	/** Called with every event when it has ended, or when `finish` cuts it off. */
	onEvent: (event: VoltageEvent) => void;
}

/** Filter of the sliding reference: one minute (IEC 61000-4-30:2015, 5.4.4, from memory). */
const SLIDING_KEPT = 0.9967;
const SLIDING_NEW = 0.0033;

/**
 * Dips, swells and interruptions of a single-phase or polyphase system, found in Urms(1/2) values that come window by window.
 * Dip: begins when any channel is below its threshold, ends when all are at or above threshold + hysteresis; swell
 * mirrored; interruption: begins when all are below its threshold, ends when any is at or above threshold + hysteresis.
 * A channel without a value has no say.
 * source  IEC 61000-4-30:2015, 5.4 and 5.5 (from memory)
 */
export class VoltageEventDetector {
	private readonly count: number;
	private readonly latest: LatestValues;
	private readonly declared: LatestValues;
	private readonly references: Float64Array;
	private readonly watches: { dip: EventWatch; swell: EventWatch; interruption: EventWatch };
	private touchedUntil_s = -Infinity;

	constructor(private readonly setup: EventDetectorSetup) {
		const thresholds = setup.thresholds ?? USUAL_THRESHOLDS;
		this.count = setup.nominals.length;
		this.references = Float64Array.from(setup.nominals);
		const empty = () => new Float64Array(this.count).fill(NaN);
		this.latest = { levels_pct: empty(), starts_s: empty(), cycles_s: empty() };
		this.declared = {
			...this.latest,
			levels_pct: setup.hasSlidingReference ? empty() : this.latest.levels_pct
		};
		this.watches = {
			dip: new EventWatch('dip', thresholds, this.latest),
			swell: new EventWatch('swell', thresholds, this.latest),
			interruption: new EventWatch('interruption', thresholds, this.declared)
		};
	}

	/**
	 * The values of one window, of all channels; windows in order of time, overlapping ones allowed.
	 * window     start_s: seconds after sample 0 of the capture
	 * values     [channels] as `measureHalfCycles` gave them
	 * windowRms  [channels] rms of the window; needed with a sliding reference only
	 * returns    whether an event touches the window: it is then flagged for all quantities (4.7)
	 */
	push(
		window: { start_s: number; length_s: number },
		values: readonly HalfCycles[],
		windowRms?: Float64Array
	): boolean {
		let flagged = this.isInEvent() || this.touchedUntil_s > window.start_s;
		const next = new Uint16Array(this.count);
		for (;;) {
			let channel = -1;
			let earliest_s = Infinity;
			for (let c = 0; c < this.count; c++) {
				const { first, rms } = values[c]!;
				if (next[c]! >= rms.length || Number.isNaN(first)) continue;
				const start_s = window.start_s + ((first + next[c]!) * window.length_s) / rms.length;
				if (start_s < earliest_s) {
					channel = c;
					earliest_s = start_s;
				}
			}
			if (channel < 0) break;
			const { rms } = values[channel]!;
			const value = rms[next[channel]!++]!;
			if (this.feed(channel, earliest_s, (2 * window.length_s) / rms.length, value)) flagged = true;
		}
		for (let c = 0; c < this.count; c++) if (Number.isNaN(values[c]!.first)) this.forget(c);
		if (windowRms !== undefined && this.setup.hasSlidingReference && !flagged) this.slide(windowRms);
		return flagged;
	}

	/**
	 * One value of one channel, in order of time; one that repeats the last (windows overlap) is passed over.
	 * returns  whether an event is on, or ended with it
	 */
	feed(channel: number, start_s: number, cycle_s: number, value: number): boolean {
		const { latest, declared } = this;
		if (start_s < latest.starts_s[channel]! + cycle_s / 4) return this.isInEvent();
		if (start_s > latest.starts_s[channel]! + 1.75 * cycle_s) this.markGap();
		latest.starts_s[channel] = start_s;
		latest.cycles_s[channel] = cycle_s;
		if (Number.isNaN(value)) {
			this.forget(channel);
			return this.isInEvent();
		}
		declared.levels_pct[channel] = (100 * value) / this.setup.nominals[channel]!;
		latest.levels_pct[channel] = (100 * value) / this.references[channel]!;
		const { dip, swell, interruption } = this.watches;
		const wasInEvent = this.isInEvent();
		const ended = [interruption.step(channel), dip.step(channel), swell.step(channel)];
		if (interruption.open !== null && dip.open !== null) dip.open.holdsInterruption = true;
		for (const event of ended) if (event !== null) this.report(event);
		return wasInEvent || this.isInEvent();
	}

	/** Copies of the events that are on, with what is known of them so far. */
	open(): VoltageEvent[] {
		return this.openEvents().map((event) => ({
			...event,
			channels: event.channels.map((channel) => ({ ...channel }))
		}));
	}

	/** The record stops, or a gap follows: events that are on are reported as open, and nothing is carried further. */
	finish(): void {
		for (const watch of Object.values(this.watches)) {
			const event = watch.stop();
			if (event !== null) this.report(event);
		}
		this.latest.levels_pct.fill(NaN);
		this.declared.levels_pct.fill(NaN);
	}

	private isInEvent(): boolean {
		const { dip, swell, interruption } = this.watches;
		return dip.open !== null || swell.open !== null || interruption.open !== null;
	}

	private openEvents(): VoltageEvent[] {
		return Object.values(this.watches).flatMap((watch) => (watch.open === null ? [] : [watch.open]));
	}

	private forget(channel: number): void {
		this.latest.levels_pct[channel] = NaN;
		this.declared.levels_pct[channel] = NaN;
		this.markGap();
	}

	private markGap(): void {
		for (const event of this.openEvents()) event.hasGap = true;
	}

	private report(event: VoltageEvent): void {
		this.touchedUntil_s = Math.max(this.touchedUntil_s, event.touchedUntil_s);
		this.setup.onEvent(event);
	}

	private slide(windowRms: Float64Array): void {
		for (let c = 0; c < this.count; c++) {
			const rms = windowRms[c]!;
			if (!Number.isNaN(rms)) this.references[c] = SLIDING_KEPT * this.references[c]! + SLIDING_NEW * rms;
		}
	}
}
