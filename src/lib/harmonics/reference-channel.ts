import { strongestPeak, taperedSpectrum, type SpectralPeak } from '../numerics/frequency/spectral-peak';
import type { CaptureSource } from '../recording/sample-source';
import { err, ok, type Result } from '../result';
import type { AnalysisProblem } from './analysis-problem';
import { readStretch } from './engine/read-stretch';
import type { Stretch } from './engine/stretches';
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
/** Length of one place that is looked at, and how many are looked at along the capture. */
const PLACE_S = 1;
const MOST_PLACES = 8;

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
 * stretch  the stretch of the capture to look at
 */
export function chooseReferenceChannel(
	source: CaptureSource,
	mappings: readonly ChannelMapping[],
	stretch: Stretch
): Result<ReferenceChannel, AnalysisProblem> {
	const voltages = mappings.filter((m) => m.quantity === 'voltage');
	const currents = mappings.filter((m) => m.quantity === 'current');
	const chosen =
		chooseVoltage(candidatesAmong(source, voltages, stretch)) ??
		strongest(candidatesAmong(source, currents, stretch));
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

/** Those of some channels that carry a fundamental. */
function candidatesAmong(
	source: CaptureSource,
	mappings: readonly ChannelMapping[],
	stretch: Stretch
): Candidate[] {
	const indexes = mappings.map((m) => m.channelIndex);
	const loudest = indexes.length > 0 ? loudestPlaces(source, indexes, stretch) : [];
	return mappings.flatMap((mapping, m) => {
		const peak = fundamentalPeak(loudest[m] ?? null, stretch.samplingRate_Hz);
		return peak ? [{ mapping, peak, strength: peak.rms * Math.abs(mapping.toPrimary) }] : [];
	});
}

function chooseVoltage(voltages: readonly Candidate[]): Candidate | null {
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

function fundamentalPeak(samples: Float64Array | null, samplingRate_Hz: number): SpectralPeak | null {
	if (!samples) return null;
	const spectrum = taperedSpectrum(samples, 0, samples.length, samplingRate_Hz, 8000);
	if (!(spectrum.acRms > 0)) return null;
	const inBand = strongestPeak(spectrum, POWER_BAND_HZ.from, POWER_BAND_HZ.to);
	if (inBand && inBand.rms >= LEAST_SHARE * spectrum.acRms) return inBand;
	const anywhere = strongestPeak(spectrum, WIDE_BAND_HZ.from, WIDE_BAND_HZ.to);
	return anywhere && anywhere.rms >= LEAST_SHARE_WIDE * spectrum.acRms ? anywhere : null;
}

/** Per channel the place with the greatest mean square among those looked at; where all have gaps, a run between gaps. */
function loudestPlaces(
	source: CaptureSource,
	channelIndexes: readonly number[],
	{ fromSample, toSample, samplingRate_Hz }: Stretch
): (Float64Array | null)[] {
	const length = Math.min(toSample - fromSample, Math.ceil(PLACE_S * samplingRate_Hz));
	const span = toSample - fromSample - length;
	const places = Math.min(MOST_PLACES, 1 + Math.ceil((2 * span) / length));
	const best: (Float64Array | null)[] = channelIndexes.map(() => null);
	const most = channelIndexes.map(() => 0);
	const run: (Float64Array | null)[] = channelIndexes.map(() => null);
	for (let place = 0; place < places; place++) {
		const from = fromSample + (places > 1 ? Math.floor((span * place) / (places - 1)) : 0);
		readStretch(source, channelIndexes, from, from + length).forEach((samples, c) => {
			let sum = 0;
			for (let i = 0; i < samples.length; i++) sum += samples[i]! * samples[i]!;
			if (sum > most[c]!) {
				most[c] = sum;
				best[c] = samples;
			} else if (Number.isNaN(sum) && !best[c]) {
				run[c] = longer(run[c] ?? null, longestCompleteRun(samples));
			}
		});
	}
	return best.map((samples, c) => samples ?? run[c] ?? null);
}

function longer(a: Float64Array | null, b: Float64Array | null): Float64Array | null {
	return a && (!b || a.length >= b.length) ? a : b;
}

function longestCompleteRun(samples: Float64Array): Float64Array | null {
	let best: Float64Array | null = null;
	let start = 0;
	for (let i = 0; i <= samples.length; i++) {
		if (i < samples.length && samples[i]! === samples[i]!) continue;
		if (i - start > (best ? best.length : 2)) best = samples.subarray(start, i);
		start = i + 1;
	}
	return best;
}
