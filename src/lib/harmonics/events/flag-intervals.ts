import type { VoltageEvent } from './voltage-event';

/**
 * Marks intervals that hold some of an event, for all quantities of the point.
 * starts_s, lengths_s  [n] seconds after sample 0 of the capture, any order, overlaps allowed
 * returns              [n] 1 = flagged
 * source               IEC 61000-4-30:2015, 4.7 (from memory): flagged data are kept and marked
 */
export function flagIntervals(
	starts_s: Float64Array,
	lengths_s: Float64Array,
	events: readonly Pick<VoltageEvent, 'start_s' | 'touchedUntil_s'>[]
): Uint8Array {
	const flagged = new Uint8Array(starts_s.length);
	for (let i = 0; i < flagged.length; i++) {
		const start_s = starts_s[i]!;
		const end_s = start_s + lengths_s[i]!;
		if (events.some((event) => event.start_s < end_s && event.touchedUntil_s > start_s)) flagged[i] = 1;
	}
	return flagged;
}
