import { executeRealDft, planRealDft } from '../numerics/dft/real-dft';
import { readLineRms } from '../numerics/dft/spectral-lines';

/** Levels in bands of 200 Hz between 2 and 9 kHz. */
export interface SupraharmonicBands {
	/** [bands] centre of each band: 2100, 2300, … 8900 Hz. */
	centres_Hz: Float64Array;
	/** [bands] rms in the band, unit of the samples. */
	rms: Float64Array;
}

/** Length of the window: lines are 10 Hz apart. */
const WINDOW_S = 0.1;
const FIRST_CENTRE_HZ = 2100;
const LAST_CENTRE_HZ = 8900;
const BAND_HZ = 200;
/** Above this share of the sampling rate the recorder's own filter is falling. */
const USABLE_SHARE_OF_RATE = 0.45;

/**
 * Joins lines to bands: Y_B² = Σ C_f² from b − 95 Hz to b + 100 Hz.
 * lines             [n] one-sided rms lines
 * lineSpacing_Hz    10 Hz by the standard; with another spacing the lines that lie within these bounds
 * highestUsable_Hz  bands that reach beyond are left out
 * source            IEC 61000-4-7:2002+A1:2008, annex B (informative; from memory)
 */
export function supraharmonicBands(
	lines: Float64Array,
	lineSpacing_Hz: number,
	highestUsable_Hz: number
): SupraharmonicBands {
	const centres: number[] = [];
	const levels: number[] = [];
	const reach_Hz = Math.min(highestUsable_Hz, (lines.length - 1) * lineSpacing_Hz);
	for (let centre = FIRST_CENTRE_HZ; centre <= LAST_CENTRE_HZ; centre += BAND_HZ) {
		if (centre + BAND_HZ / 2 > reach_Hz + 1e-6) break;
		const from = Math.ceil((centre - 95) / lineSpacing_Hz - 1e-9);
		const to = Math.floor((centre + 100) / lineSpacing_Hz + 1e-9);
		let sum = 0;
		for (let k = from; k <= to; k++) sum += lines[k]! ** 2;
		centres.push(centre);
		levels.push(Math.sqrt(sum));
	}
	return { centres_Hz: Float64Array.from(centres), rms: Float64Array.from(levels) };
}

/**
 * Bands of one window of 100 ms, not synchronised to the fundamental.
 * samples          any unit; the first 100 ms are used; NaN anywhere in them makes every band NaN
 * samplingRate_Hz  bands up to 45 % of it are given; none below about 4.9 kHz
 * returns          null when there are fewer samples than 100 ms
 * note             Of an unsynchronised rectangular window the skirts of the fundamental alone put 0.4 % of it into the
 *                  lowest band, and the standard's high-pass is not at hand in a recording: a Hann taper takes its place,
 *                  whose skirts fall by the cube of the distance. Its gain in power (1.5) is taken off.
 * error            as measured: a fundamental of 1 leaves below 1e-6 in any band, an order 100 Hz below a band 3e-4 of
 *                  itself; a tone within 70 Hz of a centre reads within 1e-4, one beside a border is shared by both bands
 */
export function supraharmonicsOf(samples: Float64Array, samplingRate_Hz: number): SupraharmonicBands | null {
	const count = Math.round(WINDOW_S * samplingRate_Hz);
	if (samples.length < count || count < 2) return null;
	const tapered = new Float64Array(count);
	for (let i = 0; i < count; i++)
		tapered[i] = samples[i]! * (1 - Math.cos((2 * Math.PI * (i + 0.5)) / count));
	const plan = planRealDft(count);
	executeRealDft(plan, tapered);
	const lines = new Float64Array(plan.lineCount);
	readLineRms(plan, lines, lines.length);
	// Hann with amplitude gain 1 spreads a tone over three lines whose squares sum to 1.5.
	for (let k = 0; k < lines.length; k++) lines[k]! /= Math.sqrt(1.5);
	return supraharmonicBands(lines, samplingRate_Hz / count, USABLE_SHARE_OF_RATE * samplingRate_Hz);
}
