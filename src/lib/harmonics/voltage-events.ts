import type { HalfCycleRms } from './half-cycle-rms';

export const DIP_THRESHOLD_PCT = 90;
export const SWELL_THRESHOLD_PCT = 110;
export const INTERRUPTION_THRESHOLD_PCT = 5;
export const EVENT_HYSTERESIS_PCT = 2;

export interface VoltageEvent {
	kind: 'dip' | 'swell' | 'interruption';
	/** Sample numbers; from the start of the first value beyond the threshold to the return. */
	from: number;
	to: number;
	/** Lowest (dip, interruption) or highest (swell) Urms(1/2) in percent of the nominal voltage. */
	extreme_pct: number;
}

/**
 * Dips, swells and interruptions of one voltage.
 * values             Urms(1/2) in primary volts
 * nominalVoltage_V   100 %
 * returns            events in order of time; a dip that falls below 5 % on this conductor is called an interruption
 * source             IEC 61000-4-30:2015, 5.4 and 5.5 (from memory): thresholds 90 %, 110 %, 5 %, hysteresis 2 % of nominal
 */
export function findVoltageEvents(values: HalfCycleRms, nominalVoltage_V: number): VoltageEvent[] {
	const events: VoltageEvent[] = [];
	let open: VoltageEvent | null = null;
	const count = values.rms.length;
	for (let i = 0; i < count; i++) {
		const level_pct = (100 * values.rms[i]!) / nominalVoltage_V;
		if (Number.isNaN(level_pct)) continue;
		const start = values.starts[i]!;
		const length = values.lengths[i]!;
		if (open && hasReturned(open, level_pct)) {
			open.to = start + length / 2;
			events.push(open);
			open = null;
		}
		if (!open && level_pct < DIP_THRESHOLD_PCT) {
			open = { kind: 'dip', from: start, to: start + length, extreme_pct: level_pct };
		} else if (!open && level_pct > SWELL_THRESHOLD_PCT) {
			open = { kind: 'swell', from: start, to: start + length, extreme_pct: level_pct };
		}
		if (open) extend(open, level_pct, start + length);
	}
	if (open) events.push(open);
	return events;
}

function hasReturned(event: VoltageEvent, level_pct: number): boolean {
	return event.kind === 'swell'
		? level_pct <= SWELL_THRESHOLD_PCT - EVENT_HYSTERESIS_PCT
		: level_pct >= DIP_THRESHOLD_PCT + EVENT_HYSTERESIS_PCT;
}

function extend(event: VoltageEvent, level_pct: number, to: number): void {
	event.to = to;
	if (event.kind === 'swell') {
		event.extreme_pct = Math.max(event.extreme_pct, level_pct);
		return;
	}
	event.extreme_pct = Math.min(event.extreme_pct, level_pct);
	if (event.extreme_pct < INTERRUPTION_THRESHOLD_PCT) event.kind = 'interruption';
}
