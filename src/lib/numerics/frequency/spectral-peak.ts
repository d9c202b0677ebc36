import { executeRealDft, planRealDft, type RealDftPlan } from '../dft/real-dft';

/** Longest stretch looked at, in points after thinning; enough for 1 s at 8 kHz. */
const MAX_POINTS = 8192;

/** The plan of the last length: channels of one capture are looked at one after the other. */
let lastPlan: RealDftPlan | null = null;

function plannedFor(length: number): RealDftPlan {
	if (lastPlan?.length !== length) lastPlan = planRealDft(length);
	return lastPlan;
}

export interface SpectralPeak {
	/** cycles per second. */
	frequency_Hz: number;
	/** rms of the tone at the peak, unit of the samples. */
	rms: number;
}

/** Hann-tapered, zero-padded magnitude spectrum of a stretch; made once, asked for peaks in several bands. */
export interface TaperedSpectrum {
	lineSpacing_Hz: number;
	/** [lines] rms that a tone exactly on the line would have. */
	rmsLines: Float64Array;
	/** rms of the stretch without its mean. */
	acRms: number;
}

/**
 * Spectrum for a first look at which tones a stretch holds.
 * samples   any unit, [from, to) free of NaN
 * maxRate_Hz content above half of it is of no interest: the stretch is thinned by block means down to about that rate
 */
export function taperedSpectrum(
	samples: Float64Array,
	from: number,
	to: number,
	samplingRate_Hz: number,
	maxRate_Hz: number
): TaperedSpectrum {
	const thin = Math.max(1, Math.floor(samplingRate_Hz / maxRate_Hz));
	const points = Math.min(MAX_POINTS, Math.floor((to - from) / thin));
	let padded = 2;
	while (padded < 2 * points) padded *= 2;
	const block = new Float64Array(padded);
	let sum = 0;
	for (let i = 0; i < points; i++) {
		let blockSum = 0;
		for (let j = 0; j < thin; j++) blockSum += samples[from + i * thin + j]!;
		block[i] = blockSum / thin;
		sum += block[i]!;
	}
	const mean = sum / points;
	let squares = 0;
	for (let i = 0; i < points; i++) {
		const value = block[i]! - mean;
		squares += value * value;
		block[i] = value * (1 - Math.cos((2 * Math.PI * (i + 0.5)) / points));
	}
	const plan = plannedFor(padded);
	executeRealDft(plan, block);
	const rmsLines = new Float64Array(plan.lineCount);
	for (let k = 0; k < plan.lineCount; k++) {
		rmsLines[k] = (Math.SQRT2 * Math.hypot(plan.spectrum[2 * k]!, plan.spectrum[2 * k + 1]!)) / points;
	}
	return {
		lineSpacing_Hz: samplingRate_Hz / thin / padded,
		rmsLines,
		acRms: Math.sqrt(squares / points)
	};
}

/**
 * Strongest local maximum between two frequencies, refined by a parabola through the logarithms of three lines.
 * returns  null when the band holds no local maximum
 * error    some hundredths of the reciprocal length of the stretch; good enough to start a finer search
 */
export function strongestPeak(
	spectrum: TaperedSpectrum,
	fromFrequency_Hz: number,
	toFrequency_Hz: number
): SpectralPeak | null {
	const { rmsLines, lineSpacing_Hz } = spectrum;
	const first = Math.max(1, Math.ceil(fromFrequency_Hz / lineSpacing_Hz));
	const last = Math.min(rmsLines.length - 2, Math.floor(toFrequency_Hz / lineSpacing_Hz));
	let best = -1;
	for (let k = first; k <= last; k++) {
		const value = rmsLines[k]!;
		if (!(value > 0) || value < rmsLines[k - 1]! || value < rmsLines[k + 1]!) continue;
		if (best < 0 || value > rmsLines[best]!) best = k;
	}
	if (best < 0) return null;
	const below = Math.log(rmsLines[best - 1]! + Number.MIN_VALUE);
	const at = Math.log(rmsLines[best]!);
	const above = Math.log(rmsLines[best + 1]! + Number.MIN_VALUE);
	const curvature = below - 2 * at + above;
	const shift = curvature < 0 ? Math.max(-0.5, Math.min(0.5, (below - above) / (2 * curvature))) : 0;
	return { frequency_Hz: (best + shift) * lineSpacing_Hz, rms: rmsLines[best]! };
}
