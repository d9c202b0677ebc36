import type { Phase } from '../recording/phase';
import type { WindowBlock } from './engine/window-analyst';
import type { Stretch } from './engine/stretches';
import { findVoltageEvents, type SingleVoltageEvent } from './events/single-voltage-events';
import type { ChannelMapping } from './waveform-analysis';

export interface ChannelEvent extends SingleVoltageEvent {
	channelIndex: number;
	phase: Phase;
}

/**
 * Flags windows with a dip, swell or interruption on any voltage of the point, block by block.
 * source  IEC 61000-4-30:2015, 4.7 (from memory): an event on one conductor flags the interval for all quantities
 */
export class EventFlagging {
	private readonly events: ChannelEvent[] = [];
	private readonly watched: number[];

	constructor(
		private readonly mappings: readonly ChannelMapping[],
		private readonly nominalVoltages_V: Partial<Record<Phase, number>>
	) {
		this.watched = mappings.flatMap((m, i) =>
			m.quantity === 'voltage' && nominalVoltages_V[m.phase] ? [i] : []
		);
	}

	/** returns  [windows of the block] 1 where an event lies in the window */
	accept(block: WindowBlock, stretch: Stretch): Uint8Array {
		const flagged = new Uint8Array(block.windows.length);
		const found: VoltageEvent[] = [];
		for (const m of this.watched) {
			const { channelIndex, phase } = this.mappings[m]!;
			for (const event of findVoltageEvents(block.halfCycles[m]!, this.nominalVoltages_V[phase]!)) {
				found.push(event);
				const time_s = (sample: number) =>
					stretch.offset_s + (sample - stretch.fromSample) / stretch.samplingRate_Hz;
				this.events.push({
					...event,
					from: time_s(event.from),
					to: time_s(event.to),
					channelIndex,
					phase
				});
			}
		}
		block.windows.forEach((window, w) => {
			const end = window.start + window.length;
			if (found.some((e) => e.from < end && e.to > window.start)) flagged[w] = 1;
		});
		return flagged;
	}

	/** Events with their times in seconds after sample 0; null when no nominal voltage was given. */
	finish(): ChannelEvent[] | null {
		return this.watched.length > 0 ? this.events : null;
	}
}
