import type { Phase } from '../recording/phase';
import type { Stretch } from './engine/stretches';
import type { WindowBlock } from './engine/window-analyst';
import { VoltageEventDetector } from './events/event-detector';
import type { VoltageEvent } from './events/voltage-event';
import type { ChannelMapping } from './waveform-analysis';

/** An event of the point, with the conductors that it touched. */
export interface CaptureEvent extends VoltageEvent {
	phases: { channelIndex: number; phase: Phase; extreme_pct: number }[];
}

/**
 * Flags windows with a dip, swell or interruption on any voltage of the point, block by block.
 * Every mapped voltage whose nominal value is known has its say.
 * source  IEC 61000-4-30:2015, 4.7 (from memory): an event on one conductor flags the interval for all quantities
 */
export class EventFlagging {
	private readonly events: CaptureEvent[] = [];
	private readonly watched: number[];
	private readonly detector: VoltageEventDetector;
	private end_s = -Infinity;

	constructor(mappings: readonly ChannelMapping[], nominalVoltages_V: Partial<Record<Phase, number>>) {
		this.watched = mappings.flatMap((m, i) =>
			m.quantity === 'voltage' && nominalVoltages_V[m.phase] ? [i] : []
		);
		const watched = this.watched.map((m) => mappings[m]!);
		this.detector = new VoltageEventDetector({
			nominals: watched.map((m) => nominalVoltages_V[m.phase]!),
			onEvent: (event) =>
				this.events.push({
					...event,
					phases: event.channels.map(({ channel, extreme_pct }) => {
						const { channelIndex, phase } = watched[channel]!;
						return { channelIndex, phase, extreme_pct };
					})
				})
		});
	}

	/** returns  [windows of the block] 1 where an event lies in the window */
	accept(block: WindowBlock, stretch: Stretch): Uint8Array {
		const flagged = new Uint8Array(block.windows.length);
		if (this.watched.length === 0) return flagged;
		block.windows.forEach((window, w) => {
			const start_s = stretch.offset_s + (window.start - stretch.fromSample) / stretch.samplingRate_Hz;
			const length_s = window.length / stretch.samplingRate_Hz;
			if (start_s > this.end_s + length_s / 2) this.detector.finish();
			this.end_s = start_s + length_s;
			const values = this.watched.map((m) => {
				const { first, rms } = block.halfCycles[m]!;
				const perWindow = rms.length / first.length;
				return { first: first[w]!, rms: rms.subarray(w * perWindow, (w + 1) * perWindow) };
			});
			if (this.detector.push({ start_s, length_s }, values)) flagged[w] = 1;
		});
		return flagged;
	}

	/** Events in order of their ends; null when no nominal voltage was given and nothing could be looked for. */
	finish(): CaptureEvent[] | null {
		this.detector.finish();
		return this.watched.length > 0 ? this.events : null;
	}
}
