import type { Phase } from '../recording/phase';
import { seededRandom } from './waveform-random';

/** One order of a channel. */
export interface HarmonicTruth {
	order: number;
	magnitude_pctOfFundamental: number;
	/** degrees, cosine convention, referred to the channel's own fundamental: φ_h − h·φ_1. */
	phase_deg: number;
}

export interface InterharmonicTruth {
	frequency_Hz: number;
	magnitude_pctOfFundamental: number;
	/** degrees, cosine convention, at t = 0. */
	phase_deg: number;
}

/** A stretch with another amplitude: a dip (factor < 1), a swell (> 1) or an interruption (0). */
export interface AmplitudeEvent {
	from_s: number;
	to_s: number;
	factor: number;
}

/** What one channel truly carries; the yardstick for whatever measures it. */
export interface ChannelTruth {
	name: string;
	quantity: 'voltage' | 'current';
	phase: Phase;
	/** rms, V or A. */
	fundamental_rms: number;
	/** degrees, cosine convention, at t = 0. */
	fundamentalPhase_deg: number;
	harmonics: HarmonicTruth[];
	interharmonics?: InterharmonicTruth[];
	/** V or A. */
	dc?: number;
	/** Standard deviation of white noise, percent of the fundamental's rms. */
	noise_pctOfFundamental?: number;
	/** Sinusoidal modulation of the whole channel's amplitude. */
	modulation?: { frequency_Hz: number; depth_pct: number };
	events?: AmplitudeEvent[];
	/** Rounds to 2^bits steps over ±fullScale and cuts off beyond. */
	quantisation?: { bits: number; fullScale: number };
}

export interface WaveformTruth {
	frequency_Hz: number;
	/** Steady change of frequency; 0 when left out. */
	drift_HzPerSecond?: number;
	samplingRate_Hz: number;
	duration_s: number;
	seed: number;
	channels: ChannelTruth[];
}

/**
 * Samples of every channel, from t = 0.
 * returns  one Float64Array of round(duration·rate) values per channel, V or A; the same truth gives the same digits
 */
export function synthesiseWaveform(truth: WaveformTruth): Float64Array[] {
	const count = Math.round(truth.duration_s * truth.samplingRate_Hz);
	return truth.channels.map((channel, index) => synthesiseChannel(truth, channel, count, truth.seed + index));
}

function synthesiseChannel(
	truth: WaveformTruth,
	channel: ChannelTruth,
	count: number,
	seed: number
): Float64Array {
	const samples = new Float64Array(count);
	const peak = channel.fundamental_rms * Math.SQRT2;
	const start = (channel.fundamentalPhase_deg * Math.PI) / 180;
	addTone(samples, truth, 1, peak, start);
	for (const harmonic of channel.harmonics) {
		const phase = harmonic.order * start + (harmonic.phase_deg * Math.PI) / 180;
		addTone(samples, truth, harmonic.order, (peak * harmonic.magnitude_pctOfFundamental) / 100, phase);
	}
	for (const tone of channel.interharmonics ?? []) {
		const turn = (2 * Math.PI * tone.frequency_Hz) / truth.samplingRate_Hz;
		const amplitude = (peak * tone.magnitude_pctOfFundamental) / 100;
		const phase = (tone.phase_deg * Math.PI) / 180;
		for (let n = 0; n < count; n++) samples[n]! += amplitude * Math.cos(turn * n + phase);
	}
	shapeAmplitude(samples, truth.samplingRate_Hz, channel);
	addOffsetAndNoise(samples, channel, seed);
	if (channel.quantisation) quantise(samples, channel.quantisation.bits, channel.quantisation.fullScale);
	return samples;
}

function addTone(
	samples: Float64Array,
	truth: WaveformTruth,
	order: number,
	amplitude: number,
	phase: number
): void {
	const drift = truth.drift_HzPerSecond ?? 0;
	for (let n = 0; n < samples.length; n++) {
		const t = n / truth.samplingRate_Hz;
		const cycles = (truth.frequency_Hz + (drift * t) / 2) * t;
		// Whole cycles are taken off first, so that long records keep their digits.
		const turned = order * cycles;
		samples[n]! += amplitude * Math.cos(2 * Math.PI * (turned - Math.floor(turned)) + phase);
	}
}

function shapeAmplitude(samples: Float64Array, samplingRate_Hz: number, channel: ChannelTruth): void {
	const { modulation, events = [] } = channel;
	if (!modulation && events.length === 0) return;
	for (let n = 0; n < samples.length; n++) {
		const t = n / samplingRate_Hz;
		let factor = 1;
		if (modulation) {
			factor += (modulation.depth_pct / 100) * Math.cos(2 * Math.PI * modulation.frequency_Hz * t);
		}
		for (const event of events) if (t >= event.from_s && t < event.to_s) factor *= event.factor;
		samples[n]! *= factor;
	}
}

function addOffsetAndNoise(samples: Float64Array, channel: ChannelTruth, seed: number): void {
	const dc = channel.dc ?? 0;
	const deviation = ((channel.noise_pctOfFundamental ?? 0) * channel.fundamental_rms) / 100;
	const random = seededRandom(seed);
	for (let n = 0; n < samples.length; n++) {
		samples[n]! += deviation > 0 ? dc + deviation * random.normal() : dc;
	}
}

function quantise(samples: Float64Array, bits: number, fullScale: number): void {
	const step = fullScale / 2 ** (bits - 1);
	const highest = 2 ** (bits - 1) - 1;
	for (let n = 0; n < samples.length; n++) {
		const code = Math.max(-highest - 1, Math.min(highest, Math.round(samples[n]! / step)));
		samples[n] = code * step;
	}
}
