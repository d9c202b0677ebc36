import { MAX_ORDER, ORDER_STRIDE } from '../harmonics/intervals';
import type { WaveformAnalysis } from '../harmonics/waveform-analysis';
import { seededRandom } from '../synthesis/waveform-random';
import { analyseExact, type SampledAs } from './analyse-exact';
import { sampleSignal, type ExactChannel, type ExactSignal, type OrderTone } from './exact-signal';

export interface SteadyCase {
	nominalFrequency_Hz: 50 | 60;
	frequency_Hz: number;
	samplingRate_Hz: number;
	/** Null: samples keep all digits of a double. */
	bits: number | null;
}

export interface SteadyErrors {
	/** Highest order that the engine reads at this rate. */
	highestOrder: number;
	/** Greatest error of the magnitude of any order, line or subgroup, in any window, percent of the fundamental. */
	magnitude_pct: number;
	/** Greatest error of a phase angle: of order 1 (of the current, referred to the voltage) and of the highest order. */
	phaseOfFirst_deg: number;
	phaseOfHighest_deg: number;
	/** Greatest relative error of the frequency. */
	frequency: number;
	/** Root mean square of the errors of all lines, percent of the fundamental. */
	rmsError_pct: number;
	/** What the rounding of the samples explains of it; 0 without rounding. */
	explained_pct: number;
	windowCount: number;
}

/** Promises of the engine for steady signals. */
export const STEADY_LIMITS = { magnitude_pct: 1e-3, phaseOfFirst_deg: 0.01, phaseOfHighest_deg: 0.1 };
/** With rounded samples: greatest ratio of the error of all lines to what the rounding explains. */
export const MOST_BEYOND_ROUNDING = 1.05;

export const FUNDAMENTAL_RMS = 100;
/** Every order from 2 on, percent of the fundamental. */
export const ORDER_LEVEL_PCT = 5;
/** Peak of fifty tones that all met at once, and some: nothing is clipped. */
export const FULL_SCALE = 600;
const LAG_DEG = 37.3;
/** Samples a cycle from which the promise holds for order 50. */
export const SAMPLES_PER_CYCLE = 128;

function tonesOf(seed: number, first_deg: number, highestOrder: number): OrderTone[] {
	const random = seededRandom(seed);
	return Array.from({ length: highestOrder }, (_, i) => ({
		order: i + 1,
		rms: i === 0 ? FUNDAMENTAL_RMS : (FUNDAMENTAL_RMS * ORDER_LEVEL_PCT) / 100,
		phase_deg: i === 0 ? first_deg : 360 * random.uniform() - 180
	}));
}

/**
 * A voltage and a current of orders 1 … 50 with pseudo-random phases, 5 % each; orders at or above half the sampling rate
 * are left out, as a recorder's anti-alias filter would do.
 */
export function steadySignal({ frequency_Hz, samplingRate_Hz }: SteadyCase): ExactSignal {
	const carried = Math.min(MAX_ORDER, Math.ceil(samplingRate_Hz / 2 / frequency_Hz) - 1);
	const channel = (quantity: 'voltage' | 'current', seed: number, first_deg: number): ExactChannel => ({
		quantity,
		phase: 'L1',
		orders: tonesOf(seed, first_deg, carried)
	});
	return { frequency_Hz, channels: [channel('voltage', 11, 23), channel('current', 12, 23 - LAG_DEG)] };
}

/** Analyses three quarters of a second of steady tones and compares every order of every window with what was put in. */
export function measureSteady(steady: SteadyCase): SteadyErrors {
	const signal = steadySignal(steady);
	const { frequency_Hz, samplingRate_Hz, bits, nominalFrequency_Hz } = steady;
	const quantisation = bits === null ? {} : { quantisation: { bits, fullScale: FULL_SCALE } };
	const sampled = { samplingRate_Hz, duration_s: 0.75, ...quantisation };
	const analysis = analyseExact(signal, sampled, { nominalFrequency_Hz });
	const { highestOrder, windowCount } = analysis;
	const errors = { magnitude_pct: 0, phaseOfFirst_deg: 0, phaseOfHighest_deg: 0, frequency: 0 };
	const worsen = (name: keyof typeof errors, error: number) => {
		// Written so that NaN counts as the worst.
		if (!(Math.abs(error) <= errors[name])) errors[name] = Math.abs(error);
	};
	const reference_deg = signal.channels[0]!.orders[0]!.phase_deg;
	let squares = 0;
	for (let w = 0; w < windowCount; w++) {
		worsen('frequency', analysis.frequency_Hz[w]! / frequency_Hz - 1);
		analysis.channels.forEach((measured, c) => {
			for (const { order, rms, phase_deg } of signal.channels[c]!.orders.slice(0, highestOrder)) {
				const at = w * ORDER_STRIDE + order;
				const error_pct = (100 * (measured.components[at]! - rms)) / FUNDAMENTAL_RMS;
				squares += error_pct ** 2;
				worsen('magnitude_pct', error_pct);
				if (bits === null) worsen('magnitude_pct', (100 * (measured.subgroups[at]! - rms)) / FUNDAMENTAL_RMS);
				const turned_deg = turned(measured.phases_deg[at]! - (phase_deg - order * reference_deg));
				if (order === 1) worsen('phaseOfFirst_deg', turned_deg);
				if (order === highestOrder) worsen('phaseOfHighest_deg', turned_deg);
			}
		});
	}
	const count = windowCount * analysis.channels.length * highestOrder;
	const explained_pct = bits === null ? 0 : roundingOnLines_pct(signal, sampled, analysis);
	return { highestOrder, ...errors, rmsError_pct: Math.sqrt(squares / count), explained_pct, windowCount };
}

/** A difference of angles in (−180, 180]. */
export function turned(difference_deg: number): number {
	return difference_deg - 360 * Math.round(difference_deg / 360);
}

/**
 * Root mean square of what the rounding of the samples puts on the lines, percent of the fundamental: the rounding errors
 * themselves, transformed at each order by a plain sum over the samples of the window, and projected on the order.
 * Where samples repeat from cycle to cycle this is more than white noise would give, as rounding then repeats as well.
 */
function roundingOnLines_pct(signal: ExactSignal, sampled: SampledAs, analysis: WaveformAnalysis): number {
	const exact = sampleSignal(signal, sampled.samplingRate_Hz, sampled.duration_s).recording;
	const rounded = sampleSignal(
		signal,
		sampled.samplingRate_Hz,
		sampled.duration_s,
		sampled.quantisation
	).recording;
	const { highestOrder, windowCount, windowStarts_s, windowLengths_s } = analysis;
	let squares = 0;
	signal.channels.forEach((channel, c) => {
		const errors = rounded.channels[c]!.samples.map((value, n) => value - exact.channels[c]!.samples[n]!);
		for (let w = 0; w < windowCount; w++) {
			const from = Math.ceil(windowStarts_s[w]! * sampled.samplingRate_Hz);
			const to = Math.floor((windowStarts_s[w]! + windowLengths_s[w]!) * sampled.samplingRate_Hz);
			for (const { order, phase_deg } of channel.orders.slice(0, highestOrder)) {
				const turn = (2 * Math.PI * order * signal.frequency_Hz) / sampled.samplingRate_Hz;
				const start = (phase_deg * Math.PI) / 180;
				let sum = 0;
				for (let n = from; n <= to; n++) sum += errors[n]! * Math.cos(turn * n + start);
				squares += ((100 * Math.SQRT2 * sum) / (to - from + 1) / FUNDAMENTAL_RMS) ** 2;
			}
		}
	});
	return Math.sqrt(squares / (windowCount * signal.channels.length * highestOrder));
}
