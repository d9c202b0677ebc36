import { strongestPeak, taperedSpectrum, type SpectralPeak } from '../numerics/frequency/spectral-peak';
import type { Recording } from '../recording/recording';
import { err, ok, type Result } from '../result';
import type { AnalysisProblem } from './analysis-problem';
import type { TimeBase } from './time-base';
import type { ChannelMapping } from './waveform-analysis';

/** Where a power-frequency fundamental is looked for first; wider than 42.5 … 69 Hz so that an outlier shows as one. */
const POWER_BAND_HZ = { from: 38, to: 74 };
/** Where a fundamental of another kind of supply is looked for when the power band holds none. */
const WIDE_BAND_HZ = { from: 10, to: 1000 };
/** Least share of the alternating rms that a tone needs to count as the fundamental. */
const LEAST_SHARE = 0.2;
const LEAST_SHARE_WIDE = 0.5;
/** A voltage weaker than this share of the strongest one does not set the pace. */
const LEAST_OF_STRONGEST = 0.2;
/** Length of the stretch that is looked at. */
const STRETCH_S = 1;

export interface ReferenceChannel {
	channelIndex: number;
	/** First estimate, within some tenths of a percent. */
	frequency_Hz: number;
}

interface Candidate {
	mapping: ChannelMapping;
	peak: SpectralPeak;
	strength: number;
}

/**
 * The channel that sets window length and phase: the first mapped voltage with a fundamental, neutral last; without one,
 * the strongest current.
 */
export function chooseReferenceChannel(
	recording: Recording,
	mappings: readonly ChannelMapping[],
	base: TimeBase
): Result<ReferenceChannel, AnalysisProblem> {
	const candidates: Candidate[] = [];
	for (const mapping of mappings) {
		const peak = fundamentalPeak(recording.channels[mapping.channelIndex]!.samples, base);
		if (peak) candidates.push({ mapping, peak, strength: peak.rms * Math.abs(mapping.toPrimary) });
	}
	const chosen = chooseVoltage(candidates) ?? strongest(candidates);
	if (!chosen) {
		return err({
			code: 'no-fundamental',
			sentence:
				`No mapped channel carries a fundamental between ${WIDE_BAND_HZ.from} and ${WIDE_BAND_HZ.to} Hz: ` +
				`windows of whole cycles cannot be formed. Map a channel that carries the mains voltage, or an ` +
				`alternating current.`
		});
	}
	return ok({ channelIndex: chosen.mapping.channelIndex, frequency_Hz: chosen.peak.frequency_Hz });
}

function chooseVoltage(candidates: readonly Candidate[]): Candidate | null {
	const voltages = candidates.filter((c) => c.mapping.quantity === 'voltage');
	const best = strongest(voltages);
	if (!best) return null;
	const strongEnough = voltages.filter((c) => c.strength >= LEAST_OF_STRONGEST * best.strength);
	return strongEnough.find((c) => c.mapping.phase !== 'N') ?? best;
}

function strongest(candidates: readonly Candidate[]): Candidate | null {
	let best: Candidate | null = null;
	for (const candidate of candidates) {
		if (!best || candidate.strength > best.strength) best = candidate;
	}
	return best;
}

function fundamentalPeak(samples: Float64Array, base: TimeBase): SpectralPeak | null {
	const stretch = loudestStretch(samples, base);
	if (!stretch) return null;
	const spectrum = taperedSpectrum(samples, stretch.from, stretch.to, base.samplingRate_Hz, 8000);
	if (!(spectrum.acRms > 0)) return null;
	const inBand = strongestPeak(spectrum, POWER_BAND_HZ.from, POWER_BAND_HZ.to);
	if (inBand && inBand.rms >= LEAST_SHARE * spectrum.acRms) return inBand;
	const anywhere = strongestPeak(spectrum, WIDE_BAND_HZ.from, WIDE_BAND_HZ.to);
	return anywhere && anywhere.rms >= LEAST_SHARE_WIDE * spectrum.acRms ? anywhere : null;
}

/** The second (or all there is) with the greatest mean square among those without missing samples. */
function loudestStretch(samples: Float64Array, base: TimeBase): { from: number; to: number } | null {
	const { fromSample, toSample } = base;
	const length = Math.min(toSample - fromSample, Math.ceil(STRETCH_S * base.samplingRate_Hz));
	const hop = Math.max(1, Math.floor(length / 2));
	let best: { from: number; to: number } | null = null;
	let most = 0;
	for (let from = fromSample; from + length <= toSample; from += hop) {
		let sum = 0;
		for (let i = from; i < from + length; i++) sum += samples[i]! * samples[i]!;
		if (sum > most) {
			most = sum;
			best = { from, to: from + length };
		}
	}
	return best ?? longestCompleteRun(samples, fromSample, toSample, length);
}

function longestCompleteRun(
	samples: Float64Array,
	from: number,
	to: number,
	most: number
): { from: number; to: number } | null {
	let best: { from: number; to: number } | null = null;
	let start = from;
	for (let i = from; i <= to; i++) {
		if (i < to && samples[i]! === samples[i]!) continue;
		if (i - start > (best ? best.to - best.from : 2)) best = { from: start, to: Math.min(i, start + most) };
		start = i + 1;
	}
	return best;
}
