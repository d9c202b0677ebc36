import { VoltageEventDetector } from './event-detector';
import type { HalfCycleRms } from './half-cycle-rms';
import { USUAL_THRESHOLDS, type VoltageEventKind } from './voltage-event';

/** An event of one voltage by itself. */
export interface SingleVoltageEvent {
	kind: VoltageEventKind;
	/** Sample numbers; from the start of the first value beyond the threshold to the end of the last one. */
	from: number;
	to: number;
	/** Lowest (dip, interruption) or highest (swell) Urms(1/2) in percent of the nominal voltage. */
	extreme_pct: number;
}

/**
 * Dips, swells and interruptions of one voltage that lies in memory as a whole, by `VoltageEventDetector`.
 * values             Urms(1/2) in primary volts
 * nominalVoltage_V   100 %
 * returns            events in order of time; a dip that falls below 5 % is called an interruption
 */
export function findVoltageEvents(values: HalfCycleRms, nominalVoltage_V: number): SingleVoltageEvent[] {
	const events: SingleVoltageEvent[] = [];
	// Sample numbers serve as the detector's time: it only compares and subtracts them.
	const detector = new VoltageEventDetector({
		nominals: [nominalVoltage_V],
		onEvent({ kind, start_s, touchedUntil_s, extreme_pct }) {
			if (kind === 'interruption') return;
			events.push({
				kind: extreme_pct < USUAL_THRESHOLDS.interruption_pct ? 'interruption' : kind,
				from: start_s,
				to: touchedUntil_s,
				extreme_pct
			});
		}
	});
	values.rms.forEach((value, i) => {
		detector.feed(0, values.starts[i]!, values.lengths[i]!, value);
	});
	detector.finish();
	return events;
}
