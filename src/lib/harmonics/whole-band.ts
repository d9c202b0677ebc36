import { executeRealDft, planRealDft } from '../numerics/dft/real-dft';
import { designKaiserKernel } from '../numerics/resample/kaiser-kernel';
import { interpolateEvenly, planInterpolator } from '../numerics/resample/interpolator';

/** One window of one channel with all that the sampling rate carries. */
export interface WholeBandWindow {
	/** [points] the window, evenly spaced over whole cycles, unit of the samples. */
	wave: Float64Array;
	/** Mean value. */
	dc: number;
	/** [highestOrder + 1] rms of the line of each order; index 0 is |dc|. */
	components: Float64Array;
	/** [highestOrder + 1] degrees, cosine convention, at the first point; index 0 is not used. */
	phases_deg: Float64Array;
	highestOrder: number;
}

/** Orders are read up to this share of the sampling rate; above it the recorder's own filter is falling. */
const USABLE_SHARE_OF_RATE = 0.45;
const MOST_POINTS = 1 << 17;
const ATTENUATION_DB = 110;

/** Samples needed on either side of the window. */
export const WHOLE_BAND_MARGIN = 48;

/**
 * Interpolates a window onto whole cycles with a kernel that passes 45 % of the sampling rate, and reads every order there.
 * The windows of an analysis stop at order 50; this one is for looking at a single window closely.
 * samples          any unit; the window with WHOLE_BAND_MARGIN samples before and after it
 * start, length    window in sample numbers of `samples`, fractions allowed
 * cycles           whole cycles in it
 * returns          NaN figures when a sample is missing
 * error            2e-6 of the fundamental; content above 45 % of the rate is suppressed, not folded
 */
export function readWholeBand(
	samples: Float64Array,
	start: number,
	length: number,
	cycles: number
): WholeBandWindow {
	const perCycle = length / cycles;
	const highestOrder = Math.floor(USABLE_SHARE_OF_RATE * perCycle - 1 / cycles + 1e-9);
	let points = 1024;
	while (points < 1.25 * length && points < MOST_POINTS) points *= 2;
	const wave = interpolated(samples, start, length, points, Math.min(1, points / length));
	const plan = planRealDft(points);
	executeRealDft(plan, wave);
	const components = new Float64Array(highestOrder + 1);
	const phases_deg = new Float64Array(highestOrder + 1);
	const dc = plan.spectrum[0]! / points;
	components[0] = Math.abs(dc);
	for (let order = 1; order <= highestOrder; order++) {
		const at = 2 * order * cycles;
		const re = plan.spectrum[at]!;
		const im = plan.spectrum[at + 1]!;
		components[order] = (Math.SQRT2 / points) * Math.hypot(re, im);
		phases_deg[order] = (Math.atan2(im, re) * 180) / Math.PI;
	}
	return { wave, dc, components, phases_deg, highestOrder };
}

/**
 * Values of the wave at evenly spaced instants, the first at `start`, the last one step before start + length.
 * samples, start, length  as readWholeBand
 * returns                 [points]; NaN near a missing sample
 * error                   2e-6 of the largest order; fewer points than samples draw the same wave, and say nothing of its
 *                         spectrum
 */
export function drawWave(samples: Float64Array, start: number, length: number, points: number): Float64Array {
	return interpolated(samples, start, length, points, 1);
}

/** lowestImage  cycles per sample: what lies above this less the usable share is suppressed */
function interpolated(
	samples: Float64Array,
	start: number,
	length: number,
	points: number,
	lowestImage: number
): Float64Array {
	const kernel = designKaiserKernel(USABLE_SHARE_OF_RATE, lowestImage - USABLE_SHARE_OF_RATE, ATTENUATION_DB);
	const wave = new Float64Array(points);
	interpolateEvenly(planInterpolator(kernel), [samples], start, length / points, points, [wave]);
	return wave;
}
