import { Flickermeter, type FlickerInterval } from '$lib/harmonics/flicker/flickermeter';
import type { Lamp } from '$lib/harmonics/flicker/perception-filters';

/** A tick of ten minutes and of two hours. */
export const TICK_MS = 7_200_000 * 240_000;
/** A record that holds the ten minutes after the tick, and before it what the meter needs to settle. */
export const TEN_MINUTES = { duration_s: 661, start_s: -60 };

export interface ModulatedVoltage {
	lamp: Lamp;
	mains_Hz: 50 | 60;
	/** Envelope over time; 1 is the level. */
	envelope?: (t_s: number) => number;
	/** Voltage over time before the envelope; a sine of the mains frequency when left out. */
	carrier?: (t_s: number) => number;
	duration_s: number;
	/** Seconds from the ten-minute tick to the first sample. */
	start_s: number;
	rate_Hz?: number;
	block?: number;
}

/** Runs a flickermeter over the voltage and gives every interval it tells of. */
export function measureFlicker({
	lamp,
	mains_Hz,
	envelope = () => 1,
	carrier,
	duration_s,
	start_s,
	rate_Hz = 2000,
	block: size = 8192
}: ModulatedVoltage): { intervals: FlickerInterval[]; pInstMax: number } {
	const intervals: FlickerInterval[] = [];
	const meter = new Flickermeter({
		samplingRate_Hz: rate_Hz,
		nominalFrequency_Hz: mains_Hz,
		lamp,
		start_ms: TICK_MS + 1000 * start_s,
		onInterval: (interval) => intervals.push(interval)
	});
	// A whole number of samples and of cycles fits into one second.
	const second = Float64Array.from({ length: rate_Hz }, (_, i) =>
		Math.sin((2 * Math.PI * mains_Hz * i) / rate_Hz)
	);
	const block = new Float64Array(size);
	const count = Math.floor(duration_s * rate_Hz);
	for (let from = 0; from < count; from += size) {
		const length = Math.min(size, count - from);
		for (let i = 0; i < length; i++) {
			const t = (from + i) / rate_Hz;
			block[i] = 325 * envelope(t) * (carrier ? carrier(t) : second[(from + i) % rate_Hz]!);
		}
		meter.push(block, 0, length);
	}
	meter.finish();
	return { intervals, pInstMax: meter.pInstMax };
}

/** Rectangular modulation; the rms swings by swing_pct between its extremes. */
export const rectangular = (frequency_Hz: number, swing_pct: number) => (t: number) =>
	1 + ((t * frequency_Hz) % 1 < 0.5 ? swing_pct : -swing_pct) / 200;

/** Changes of the level per minute, two in a period of the modulation. */
export const changesPerMinute = (changes: number, swing_pct: number) => rectangular(changes / 120, swing_pct);

export const sinusoidal = (frequency_Hz: number, swing_pct: number) => (t: number) =>
	1 + (swing_pct / 200) * Math.sin(2 * Math.PI * frequency_Hz * t);
