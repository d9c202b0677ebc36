import { designKaiserKernel, designTaperKernel, type KaiserKernel } from '../numerics/resample/kaiser-kernel';
import { MAX_ORDER } from './intervals';

/** Ripple and rejection of the interpolation: a millionth, two tens below what class I asks for. */
const ATTENUATION_DB = 120;
/**
 * Orders are read up to this share of the sampling rate. Above it the recorder's own anti-alias filter is falling, and
 * what it lets through from beyond half the rate lands there.
 */
const USABLE_SHARE_OF_RATE = 0.45;
/** The fundamental may wander this much from its first estimate without leaving the kernel's passband. */
const WANDER = 1.04;

/** How the windows of one stretch become spectra. */
export interface WindowSpectrumDesign {
	/** Points per window, a power of two. */
	points: number;
	/** Highest order with its subgroup inside the usable band. */
	highestOrder: number;
	/** Whether the lines between the highest order and the next are usable as well. */
	reachesBeyondHighest: boolean;
	/** Lines 0 … lineCount−1 are read. */
	lineCount: number;
	/** Interpolation kernel. */
	kernel: KaiserKernel;
}

/** Highest order whose subgroup lies within 45 % of the sampling rate; at most MAX_ORDER, may be below 1. */
export function highestUsableOrder(
	samplingRate_Hz: number,
	fundamental_Hz: number,
	cyclesPerWindow: number
): number {
	const reach = (USABLE_SHARE_OF_RATE * samplingRate_Hz) / fundamental_Hz;
	return Math.min(MAX_ORDER, Math.floor(reach - 1 / cyclesPerWindow + 1e-9));
}

/**
 * Chooses points and kernel so that nothing folds onto a line that is read: content from (points/window − highest line)
 * or from (sampling rate − highest line) upwards is suppressed by 120 dB. A bare taper does so with half the points of a
 * flat kernel where its droop stays moderate; the kernels divide the droop out line by line, which leaves less than 1e-7.
 * Among the powers of two that do so the cheapest is taken.
 */
export function designWindowSpectrum(
	samplingRate_Hz: number,
	fundamental_Hz: number,
	cyclesPerWindow: 10 | 12
): WindowSpectrumDesign {
	const highestOrder = highestUsableOrder(samplingRate_Hz, fundamental_Hz, cyclesPerWindow);
	const frequency = fundamental_Hz / samplingRate_Hz;
	const reachesBeyondHighest = (highestOrder + 1) * frequency * WANDER <= USABLE_SHARE_OF_RATE;
	const top = reachesBeyondHighest ? highestOrder + 1 : highestOrder + 1 / cyclesPerWindow;
	const passband = Math.min(top * frequency * WANDER, 0.46);
	const lineCount = cyclesPerWindow * (highestOrder + 1) + 1;
	let best: { points: number; cost: number; kernel: KaiserKernel } | null = null;
	for (let points = 1024; points <= 16384; points *= 2) {
		const outputRate = (points * frequency) / (WANDER * cyclesPerWindow);
		const stopband = Math.min(1, outputRate) - passband;
		if (stopband < 1.15 * passband || points < 2 * lineCount) continue;
		const kernel =
			designTaperKernel(passband, stopband, ATTENUATION_DB) ??
			designKaiserKernel(passband, stopband, ATTENUATION_DB);
		const cost = points * (2 * kernel.halfWidth + 12);
		if (!best || cost < best.cost) best = { points, cost, kernel };
	}
	if (!best) throw new Error(`No window length fits ${samplingRate_Hz} Hz at ${fundamental_Hz} Hz`);
	return {
		points: best.points,
		highestOrder,
		reachesBeyondHighest,
		lineCount,
		kernel: best.kernel
	};
}
