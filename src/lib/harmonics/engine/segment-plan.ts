import { type KernelShape } from '../../numerics/kernels/signal-kernels';
import type { SampleSource } from '../../recording/sample-source';
import { designWindowSpectrum, highestUsableOrder, type WindowSpectrumDesign } from '../window-spectrum';
import { stretchDuration_s, type Stretch } from './stretches';

/** How one stretch of one rate is analysed. Plain data: it crosses to other threads. */
export interface SegmentPlan {
	stretch: Stretch;
	cyclesPerWindow: 10 | 12;
	/** First estimate of the fundamental, Hz. */
	frequency_Hz: number;
	spectrum: WindowSpectrumDesign;
}

/** Windows that fit the buffers at once; what is kept when they move on is decoded only once. */
const WINDOWS_IN_BUFFER = 6;
/** Rows decoded at a time, bytes: small enough to stay in the nearest cache. */
const RAW_BYTES = 1 << 16;

/**
 * Plans the stretches that hold a window and a usable order.
 * returns  plans in order of time, and the stretches that are left out
 */
export function planSegments(
	stretches: readonly Stretch[],
	frequency_Hz: number,
	cyclesPerWindow: 10 | 12
): { plans: SegmentPlan[]; tooShort: Stretch[]; tooSlow: Stretch[] } {
	const plans: SegmentPlan[] = [];
	const tooShort: Stretch[] = [];
	const tooSlow: Stretch[] = [];
	for (const stretch of stretches) {
		const { samplingRate_Hz } = stretch;
		if (highestUsableOrder(samplingRate_Hz, frequency_Hz, cyclesPerWindow) < 1) {
			tooSlow.push(stretch);
			continue;
		}
		const spectrum = designWindowSpectrum(samplingRate_Hz, frequency_Hz, cyclesPerWindow);
		const plan = { stretch, cyclesPerWindow, frequency_Hz, spectrum };
		if (stretchDuration_s(stretch) < neededDuration_s(plan) * 0.9) tooShort.push(stretch);
		else plans.push(plan);
	}
	return { plans, tooShort, tooSlow };
}

/** Least length of a stretch that holds a window with the margins of the interpolation. */
export function neededDuration_s({ stretch, cyclesPerWindow, frequency_Hz, spectrum }: SegmentPlan): number {
	return cyclesPerWindow / frequency_Hz + (2 * spectrum.kernel.halfWidth + 1) / stretch.samplingRate_Hz;
}

/** Sizes of the kernels' buffers for a segment and a number of channels. */
export function kernelShapeFor(plan: SegmentPlan, channelCount: number, samples: SampleSource): KernelShape {
	const { spectrum, stretch, cyclesPerWindow, frequency_Hz } = plan;
	const windowSamples = (cyclesPerWindow * stretch.samplingRate_Hz) / frequency_Hz;
	return {
		channelCount,
		capacity: Math.ceil(windowSamples * 1.06 * WINDOWS_IN_BUFFER) + 8 * spectrum.kernel.halfWidth,
		points: spectrum.points,
		lineCount: spectrum.lineCount,
		kernel: spectrum.kernel,
		rawCapacity: samples.kind === 'rows' ? Math.max(RAW_BYTES, samples.layout.rowBytes) : 0
	};
}
