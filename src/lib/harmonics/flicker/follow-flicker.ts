import type { Phase } from '../../recording/phase';
import type { CaptureSource } from '../../recording/sample-source';
import { viewChannels, type ChannelsView } from '../engine/channel-view';
import type { Stretch } from '../engine/stretches';
import type { ChannelMapping } from '../waveform-analysis';
import {
	Flickermeter,
	LEAST_SAMPLING_RATE_HZ,
	longTermIntervals,
	SETTLING_S,
	type FlickerInterval
} from './flickermeter';
import type { Lamp } from './perception-filters';

/** Flicker of one voltage of a capture. */
export interface ChannelFlicker {
	channelIndex: number;
	phase: Phase;
	/** Intervals measured far enough to have a Pst. */
	shortTerm: FlickerInterval[];
	longTerm: { start_ms: number; plt: number }[];
}

const TEN_MINUTES_S = 600;
/** Samples taken at a time. */
const PIECE = 1 << 14;
/** Between these two the lamp of 120 V is the nearer one; a point of another level takes that of its frequency. */
const LOW_VOLTAGE_V = { lamp120: [90, 170], lamp230: [180, 280] } as const;

/** Runs a flickermeter over every voltage of one stretch, as far as somebody asks. */
export class FlickerFollower {
	private readonly meters: { meter: Flickermeter; out: ChannelFlicker }[];
	private readonly view: ChannelsView;
	private done: number;

	constructor(
		source: CaptureSource,
		mappings: readonly ChannelMapping[],
		private readonly stretch: Stretch,
		nominalFrequency_Hz: 50 | 60,
		nominalVoltages_V: Partial<Record<Phase, number>>,
		start_ms: number
	) {
		this.done = stretch.fromSample;
		const voltages = mappings.filter(({ quantity, phase }) => quantity === 'voltage' && phase !== 'N');
		this.view = viewChannels(
			source,
			voltages.map(({ channelIndex }) => channelIndex),
			PIECE
		);
		this.meters = voltages.map(({ channelIndex, phase }) => {
			const out: ChannelFlicker = { channelIndex, phase, shortTerm: [], longTerm: [] };
			const meter = new Flickermeter({
				samplingRate_Hz: stretch.samplingRate_Hz,
				nominalFrequency_Hz,
				lamp: lampFor(nominalFrequency_Hz, nominalVoltages_V.L1 ?? nominalVoltages_V[phase] ?? null),
				start_ms: start_ms + 1000 * stretch.offset_s,
				onInterval: (interval) => {
					if (!Number.isNaN(interval.pst)) out.shortTerm.push(interval);
				}
			});
			return { meter, out };
		});
	}

	/** Takes the samples up to `sample`, exclusive. */
	advance(sample: number): void {
		const to = Math.min(sample, this.stretch.toSample);
		for (let from = this.done; from < to; from += PIECE) {
			const end = Math.min(to, from + PIECE);
			this.view.cover(from, end);
			const { samples, base } = this.view;
			this.meters.forEach(({ meter }, c) => meter.push(samples[c]!, from - base, end - base));
		}
		this.done = Math.max(this.done, to);
	}

	/** Takes what is left, and tells the voltages that have a value. */
	finish(): ChannelFlicker[] {
		this.advance(this.stretch.toSample);
		return this.meters.flatMap(({ meter, out }) => {
			meter.finish();
			return out.shortTerm.length > 0 ? [{ ...out, longTerm: longTermIntervals(out.shortTerm) }] : [];
		});
	}
}

/** Whether a stretch may fill a ten-minute interval of the clock, what the meter needs to settle left aside. */
export function canMeasureFlicker(
	{ samplingRate_Hz, fromSample, toSample, offset_s }: Stretch,
	start_ms: number
): boolean {
	if (samplingRate_Hz < LEAST_SAMPLING_RATE_HZ) return false;
	const start_s = start_ms / 1000 + offset_s + SETTLING_S;
	const end_s = start_ms / 1000 + offset_s + (toSample - fromSample) / samplingRate_Hz;
	const tick_s = Math.floor(start_s / TEN_MINUTES_S) * TEN_MINUTES_S;
	// The interval that the start lies in, or the one after it; the meter itself decides how much of it is enough.
	return [tick_s, tick_s + TEN_MINUTES_S].some(
		(from_s) => Math.min(end_s, from_s + TEN_MINUTES_S) - Math.max(start_s, from_s) >= 0.95 * TEN_MINUTES_S
	);
}

function lampFor(nominalFrequency_Hz: 50 | 60, lineToNeutral_V: number | null): Lamp {
	const within = ([from, to]: readonly [number, number]) =>
		lineToNeutral_V !== null && lineToNeutral_V >= from && lineToNeutral_V <= to;
	if (within(LOW_VOLTAGE_V.lamp120)) return '120 V';
	if (within(LOW_VOLTAGE_V.lamp230)) return '230 V';
	return nominalFrequency_Hz === 60 ? '120 V' : '230 V';
}
