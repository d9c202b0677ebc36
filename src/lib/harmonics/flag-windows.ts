import type { Phase } from '../recording/phase';
import type { Recording } from '../recording/recording';
import { halfCycleRms } from './half-cycle-rms';
import { ORDER_STRIDE } from './intervals';
import { findVoltageEvents, type VoltageEvent } from './voltage-events';
import type { ChannelAnalysis } from './waveform-analysis';
import type { TrackedWindow } from './window-tracker';

export interface ChannelEvent extends VoltageEvent {
	channelIndex: number;
	phase: Phase;
}

export interface Flagging {
	/** [windowCount] 1 where a dip, swell or interruption on any voltage lies in the window. */
	flagged: Uint8Array;
	/** null when no nominal voltage was given and therefore nothing could be looked for. */
	events: ChannelEvent[] | null;
}

/**
 * Flags windows with a dip, swell or interruption on any voltage of the point.
 * source  IEC 61000-4-30:2015, 4.7 (from memory): an event on one conductor flags the interval for all quantities
 */
export function flagWindows(
	recording: Recording,
	channels: readonly ChannelAnalysis[],
	nominalVoltages_V: Partial<Record<Phase, number>>,
	setup: { cyclesPerWindow: number },
	gathered: { windows: readonly TrackedWindow[]; referencePhases_deg: readonly number[] }
): Flagging {
	const flagged = new Uint8Array(gathered.windows.length);
	const voltages = channels.filter(
		(c) => c.mapping.quantity === 'voltage' && nominalVoltages_V[c.mapping.phase]
	);
	if (voltages.length === 0) return { flagged, events: null };
	const events: ChannelEvent[] = [];
	for (const channel of voltages) {
		const { channelIndex, phase, toPrimary } = channel.mapping;
		const spans = gathered.windows.map((window, w) => ({
			start: window.start,
			length: window.length,
			// Absolute phase of the recorded signal; a reversed channel crosses zero at the same instants.
			phase_deg: channel.phases_deg[w * ORDER_STRIDE + 1]! + gathered.referencePhases_deg[w]!
		}));
		const values = halfCycleRms(recording.channels[channelIndex]!.samples, spans, setup.cyclesPerWindow);
		const nominal_recorded = nominalVoltages_V[phase]! / Math.abs(toPrimary);
		for (const event of findVoltageEvents(values, nominal_recorded)) {
			events.push({ ...event, channelIndex, phase });
		}
	}
	gathered.windows.forEach((window, w) => {
		const end = window.start + window.length;
		if (events.some((e) => e.from < end && e.to > window.start)) flagged[w] = 1;
	});
	return { flagged, events };
}
