/** Limits of dips, swells and interruptions in percent of the reference voltage. */
export interface EventThresholds {
	dip_pct: number;
	swell_pct: number;
	interruption_pct: number;
	/** How far the voltage has to return beyond the threshold. */
	hysteresis_pct: number;
}

/** Usual choice: IEC 61000-4-30:2015, 5.4 and 5.5 (from memory), the limits of EN 50160 for dips and swells. */
export const USUAL_THRESHOLDS: EventThresholds = {
	dip_pct: 90,
	swell_pct: 110,
	interruption_pct: 5,
	hysteresis_pct: 2
};

export type VoltageEventKind = 'dip' | 'swell' | 'interruption';

/** What one voltage did during an event. */
export interface ChannelInEvent {
	/** Place among the detector's channels. */
	channel: number;
	/** Start of its first value beyond the threshold. */
	start_s: number;
	/** Start of its first value that had returned; end of its last value while it has not. */
	end_s: number;
	/** Lowest (dip, interruption) or greatest (swell) Urms(1/2), percent of the reference. */
	extreme_pct: number;
}

/** A dip, swell or interruption of a single-phase or polyphase system. Times are seconds after sample 0 of the capture. */
export interface VoltageEvent {
	kind: VoltageEventKind;
	/** Start of the Urms(1/2) that began it. */
	start_s: number;
	/** Start of the Urms(1/2) that ended it; end of the last value while it is open. */
	end_s: number;
	/**
	 * end − start. A rectangular event of n cycles that begins and ends at crossings lasts n + ½ cycles: each end is known
	 * to the half cycle by which values are refreshed.
	 */
	duration_s: number;
	/** End of the last value beyond the threshold: intervals up to here hold some of the event. */
	touchedUntil_s: number;
	/** Residual voltage (dip, interruption) or greatest voltage (swell) on any channel, percent of the reference. */
	extreme_pct: number;
	/** Distance of the extreme from the reference, percentage points, positive. */
	depth_pct: number;
	/** Channels that went beyond the threshold, in their own order. */
	channels: ChannelInEvent[];
	/** For a dip: every channel went below the interruption threshold meanwhile; the interruption is an event as well. */
	holdsInterruption: boolean;
	/** The record stopped, or a gap came, before the voltage returned. */
	isOpen: boolean;
	/** Values were missing meanwhile, so the extreme and the duration are bounds. */
	hasGap: boolean;
}
