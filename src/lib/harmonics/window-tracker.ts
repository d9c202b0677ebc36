import { taperedPhasor } from '../numerics/frequency/tapered-phasor';

/** One window of whole cycles, in samples of the recording. */
export interface TrackedWindow {
	/** Sample number of the start, fractions allowed. */
	start: number;
	/** Length in samples, N cycles of the fundamental. */
	length: number;
	/** cycles per sample. */
	frequency: number;
	/** False when the fundamental could not be measured here and the last frequency was held. */
	measured: boolean;
}

export interface TrackerSetup {
	/** Samples of the reference channel. */
	reference: Float64Array;
	/** First and last sample that may be used. */
	firstSample: number;
	lastSample: number;
	/** Samples that a window has to keep clear of the ends (reach of the interpolation kernel). */
	guard: number;
	cyclesPerWindow: number;
	/** First estimate, cycles per sample. */
	frequency: number;
}

/** Shortest taper, in cycles on either side of its middle. */
const LEAST_HALF_CYCLES = 2;
/** The frequency of one window may differ by this much from the one before; more is a jump of phase, not a frequency. */
const MOST_CHANGE = 0.05;
/** Below this share of the usual amplitude there is no fundamental to follow. */
const LEAST_AMPLITUDE = 0.05;

interface PhaseMark {
	centre: number;
	phase_rad: number;
	amplitude: number;
}

/**
 * Places adjoining windows of N cycles of the measured fundamental.
 *
 * At each border the phase of the fundamental is taken through a Hann taper of up to N cycles; the frequency of a window
 * is the advance of phase between its borders over their distance, and the window's length follows from it. Near the
 * ends of the record (and beside missing samples) the taper is shortened and moved inwards, so nothing outside is used.
 *
 * error   steady signals: below 1e-6 of the length; the tolerance is 0.03 % (IEC 61000-4-7:2002+A1:2008, 4.4.1, from memory)
 */
export class WindowTracker {
	private position: number;
	private frequency: number;
	private mark: PhaseMark | null = null;
	private readonly usualAmplitude: number;

	constructor(private readonly setup: TrackerSetup) {
		this.position = setup.firstSample + setup.guard;
		this.frequency = setup.frequency;
		this.usualAmplitude = this.greatestAmplitude();
	}

	/** The next window, or null when no whole window is left. */
	next(): TrackedWindow | null {
		const start = this.position;
		const refined = this.measureFrom(start);
		if (refined !== null) this.frequency = refined;
		const length = this.setup.cyclesPerWindow / this.frequency;
		if (start + length > this.setup.lastSample - this.setup.guard) return null;
		if (refined === null) this.mark = null;
		this.position = start + length;
		return { start, length, frequency: this.frequency, measured: refined !== null };
	}

	/** Samples from the start of the next window to the end of what may be used. */
	get remaining(): number {
		return Math.max(0, this.setup.lastSample - this.position);
	}

	private measureFrom(start: number): number | null {
		const cycles = this.setup.cyclesPerWindow;
		let frequency = this.frequency;
		const run = this.completeRun(start, Math.min(start + cycles / frequency, this.setup.lastSample));
		if (!run) return null;
		let begin = this.mark && this.mark.centre >= run.from ? this.mark : this.markAt(start, frequency, run);
		let end: PhaseMark | null = null;
		for (let pass = 0; pass < 5; pass++) {
			end = this.markAt(start + cycles / frequency, frequency, run);
			if (Math.min(begin.amplitude, end.amplitude) < LEAST_AMPLITUDE * this.usualAmplitude) return null;
			const refined = advance(begin, end, frequency);
			const change = Math.abs(refined / frequency - 1);
			if (!(Math.abs(refined / this.frequency - 1) < MOST_CHANGE)) return null;
			frequency = refined;
			if (change < 2e-5) break;
			if (begin !== this.mark) begin = this.markAt(start, frequency, run);
		}
		this.mark = end;
		return frequency;
	}

	private markAt(border: number, frequency: number, run: { from: number; to: number }): PhaseMark {
		const cycle = 1 / frequency;
		const reach = LEAST_HALF_CYCLES * cycle;
		const centre = Math.max(run.from + reach, Math.min(run.to - reach, border));
		const room = Math.min(centre - run.from, run.to - centre) / cycle;
		const halfCycles = Math.max(
			LEAST_HALF_CYCLES,
			Math.min(this.setup.cyclesPerWindow / 2, Math.floor(room + 1e-9))
		);
		const phasor = taperedPhasor(this.setup.reference, centre, frequency, halfCycles);
		return { centre, phase_rad: phasor.phase_rad, amplitude: phasor.amplitude };
	}

	/** The stretch without missing samples that holds [from, to]; null when a sample inside is missing. */
	private completeRun(from: number, to: number): { from: number; to: number } | null {
		const { reference, firstSample, lastSample, cyclesPerWindow } = this.setup;
		const reach = Math.ceil(cyclesPerWindow / this.frequency);
		const first = Math.floor(from);
		const last = Math.ceil(to);
		for (let i = first; i <= last; i++) if (Number.isNaN(reference[i])) return null;
		let low = first;
		const lowest = Math.max(firstSample, first - reach);
		while (low > lowest && !Number.isNaN(reference[low - 1])) low--;
		let high = last;
		const highest = Math.min(lastSample, last + reach);
		while (high < highest && !Number.isNaN(reference[high + 1])) high++;
		return (high - low) * this.frequency > 2 * LEAST_HALF_CYCLES + 1 ? { from: low, to: high } : null;
	}

	/** Amplitude that the fundamental usually has: the greatest of up to 16 places along the record. */
	private greatestAmplitude(): number {
		const { reference, firstSample, lastSample } = this.setup;
		const reach = LEAST_HALF_CYCLES / this.frequency;
		const first = firstSample + reach;
		const span = lastSample - reach - first;
		let greatest = 0;
		for (let i = 0; i < 16 && span >= 0; i++) {
			const { amplitude } = taperedPhasor(
				reference,
				first + (span * i) / 15,
				this.frequency,
				LEAST_HALF_CYCLES
			);
			if (amplitude > greatest) greatest = amplitude;
		}
		return greatest;
	}
}

function advance(begin: PhaseMark, end: PhaseMark, frequency: number): number {
	const distance = end.centre - begin.centre;
	const fraction = (end.phase_rad - begin.phase_rad) / (2 * Math.PI);
	const turns = Math.round(frequency * distance - fraction);
	return (turns + fraction) / distance;
}
