import { taperedPhasor, type TaperedPhasor } from '../numerics/frequency/tapered-phasor';
import type { ChannelView } from './engine/channel-view';

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
	/** True for the first window of a train that starts at a ten-minute tick: it overlaps the one before. */
	resync: boolean;
}

export interface TrackerSetup {
	reference: ChannelView;
	/** First and last sample that may be used. */
	firstSample: number;
	lastSample: number;
	/** Samples that a window has to keep clear of the ends (reach of the interpolation kernel). */
	guard: number;
	cyclesPerWindow: number;
	/** First estimate, cycles per sample. */
	frequency: number;
	/** Sample numbers (fractions allowed) at which the train starts anew; ascending. */
	ticks?: Iterator<number>;
	/** Tone of the reference channel near a frequency, see taperedPhasor; taken from its samples when left out. */
	phasorAt?: (centre: number, frequency: number, halfCycles: number) => TaperedPhasor;
}

/** Windows' worth of samples on one side of an edge from which the course of the phase there is taken. */
const EDGE_WINDOWS = 4;

/** Samples that the tracker may look at together: EDGE_WINDOWS, a window between its neighbours is less. */
export function trackerReach(cyclesPerWindow: number, frequency: number): number {
	return Math.ceil(((EDGE_WINDOWS + 0.2) * cyclesPerWindow) / frequency) + 16;
}

/** Longest taper between neighbours: its half as a share of a window. */
const WIDEST_SHARE = 0.7;
/** Shortest taper, in cycles on either side of its middle. */
const LEAST_HALF_CYCLES = 2;
/** The frequency of one window may differ by this much from the one before; more is a jump of phase, not a frequency. */
const MOST_CHANGE = 0.05;
/** A window that ends within this many samples of the tick ends on it. */
const ON_TICK = 0.01;
/** The course of the phase beside an edge is believed where it agrees so well with what its nearest part says. */
const MOST_DISAGREEMENT = 3e-4;
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
 * At each border the phase of the fundamental is taken through a Hann taper of up to 1.4·N cycles; the frequency of a window
 * is the advance of phase between its borders over their distance, and the window's length follows from it. Near the
 * ends of the record (and beside missing samples) the taper is shortened and moved inwards, so nothing outside is used;
 * the frequency is then that of a parabola through the phases of three wide tapers further inside, at the window's middle.
 * At a tick the window that straddles it is completed, and the next starts at the tick itself (IEC 61000-4-30:2015,
 * 4.5.3, from memory).
 *
 * error   steady signals: below 1e-6 of the length, moving ones: docs/accuracy.md; the tolerance is 0.03 % (IEC 61000-4-7:2002+A1:2008, 4.4.1, from memory)
 */
export class WindowTracker {
	private position: number;
	private frequency: number;
	private mark: PhaseMark | null = null;
	private resync = false;
	/** Samples that were found without a gap. */
	private clean = { from: 1, to: 0 };
	private tick: number;
	private readonly usualAmplitude: number;

	constructor(private readonly setup: TrackerSetup) {
		this.position = setup.firstSample + setup.guard;
		this.frequency = setup.frequency;
		this.usualAmplitude = this.greatestAmplitude();
		this.tick = this.tickAfter(this.position);
	}

	/** The next window, or null when no whole window is left. */
	next(): TrackedWindow | null {
		const start = this.position;
		const refined = this.measureFrom(start);
		if (refined !== null) this.frequency = refined;
		const length = this.setup.cyclesPerWindow / this.frequency;
		if (start + length > this.setup.lastSample - this.setup.guard) return null;
		if (refined === null) this.mark = null;
		const { resync } = this;
		this.resync = start + length > this.tick - ON_TICK;
		if (this.resync) {
			this.position = this.tick;
			this.mark = null;
			this.tick = this.tickAfter(this.tick + 1);
		} else this.position = start + length;
		return { start, length, frequency: this.frequency, measured: refined !== null, resync };
	}

	/** Interharmonics from 6 Hz off the fundamental are then damped to less than an eighth in its phase. */
	private get widestHalfCycles(): number {
		return Math.floor(WIDEST_SHARE * this.setup.cyclesPerWindow);
	}

	private tickAfter(position: number): number {
		for (;;) {
			const next = this.setup.ticks?.next();
			if (!next || next.done) return Infinity;
			if (next.value > position) return next.value;
		}
	}

	/** Samples from the start of the next window to the end of what may be used. */
	get remaining(): number {
		return Math.max(0, this.setup.lastSample - this.position);
	}

	private measureFrom(start: number): number | null {
		const cycles = this.setup.cyclesPerWindow;
		let frequency = this.frequency;
		const reach = cycles / frequency;
		const { firstSample, lastSample } = this.setup;
		this.setup.reference.cover(
			Math.max(firstSample, Math.floor(start - 1.05 * reach)),
			Math.min(lastSample + 1, Math.ceil(start + 2.1 * reach) + 1)
		);
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
		const half = this.widestHalfCycles / frequency;
		if (start - run.from > half && run.to - start > half + cycles / frequency) {
			this.mark = end;
			return frequency;
		}
		this.mark = null;
		return this.frequencyAtEdge(start, run, (begin.centre + end!.centre) / 2, frequency);
	}

	/**
	 * Frequency of a window beside an edge, from a parabola through the phases of three tapers of equal length.
	 * middle    where `nearest`, the frequency by the shifted tapers of the window itself, holds
	 * returns   `nearest` where the record beside the edge is too short or does not move evenly
	 */
	private frequencyAtEdge(
		start: number,
		run: { from: number; to: number },
		middle: number,
		nearest: number
	): number {
		const { from, to } = this.widened(start, run);
		const { cyclesPerWindow } = this.setup;
		const room = (to - from) * nearest;
		const halfCycles = Math.min(cyclesPerWindow, Math.floor(room / EDGE_WINDOWS));
		if (halfCycles < LEAST_HALF_CYCLES || room < 2 * cyclesPerWindow) return nearest;
		let frequency = nearest;
		for (let pass = 0; pass < 5; pass++) {
			const reach = halfCycles / frequency;
			const marks = [from + reach, (from + to) / 2, to - reach].map((centre) => ({
				centre,
				...this.phasorAt(centre, frequency, halfCycles)
			}));
			if (marks.some(({ amplitude }) => !(amplitude > LEAST_AMPLITUDE * this.usualAmplitude))) return nearest;
			const slopeAt = parabolaSlope(marks as [PhaseMark, PhaseMark, PhaseMark], frequency);
			if (!(Math.abs(slopeAt(middle) / nearest - 1) < MOST_DISAGREEMENT)) return nearest;
			const refined = slopeAt(start + cyclesPerWindow / frequency / 2);
			const change = Math.abs(refined / frequency - 1);
			frequency = refined;
			if (change < 2e-5) break;
		}
		return frequency;
	}

	/** The stretch without missing samples beside the edge, up to EDGE_WINDOWS long. */
	private widened(start: number, run: { from: number; to: number }): { from: number; to: number } {
		const { firstSample, lastSample, cyclesPerWindow, reference } = this.setup;
		const reach = (EDGE_WINDOWS * cyclesPerWindow) / this.frequency;
		const atStart = start - run.from < run.to - start - cyclesPerWindow / this.frequency;
		const lowest = atStart ? run.from : Math.max(firstSample, Math.ceil(run.to - reach));
		const highest = atStart ? Math.min(lastSample, Math.floor(run.from + reach)) : run.to;
		reference.cover(lowest, highest + 1);
		const { samples, base } = reference;
		let { from, to } = run;
		while (from > lowest && !Number.isNaN(samples[from - 1 - base])) from--;
		while (to < highest && !Number.isNaN(samples[to + 1 - base])) to++;
		return { from, to };
	}

	private markAt(border: number, frequency: number, run: { from: number; to: number }): PhaseMark {
		const cycle = 1 / frequency;
		const reach = LEAST_HALF_CYCLES * cycle;
		const centre = Math.max(run.from + reach, Math.min(run.to - reach, border));
		const room = Math.min(centre - run.from, run.to - centre) / cycle;
		const halfCycles = Math.max(LEAST_HALF_CYCLES, Math.min(this.widestHalfCycles, Math.floor(room + 1e-9)));
		return { centre, ...this.phasorAt(centre, frequency, halfCycles) };
	}

	private phasorAt(centre: number, frequency: number, halfCycles: number): TaperedPhasor {
		const { reference, phasorAt } = this.setup;
		if (phasorAt) return phasorAt(centre, frequency, halfCycles);
		return taperedPhasor(reference.samples, centre - reference.base, frequency, halfCycles);
	}

	/** The stretch without missing samples that holds [from, to]; null when a sample inside is missing. */
	private completeRun(from: number, to: number): { from: number; to: number } | null {
		const { firstSample, lastSample, cyclesPerWindow } = this.setup;
		const { samples, base } = this.setup.reference;
		const reach = Math.ceil(cyclesPerWindow / this.frequency);
		const first = Math.floor(from);
		const last = Math.ceil(to);
		const lowest = Math.max(firstSample, first - reach);
		const highest = Math.min(lastSample, last + reach);
		// Most of it was looked through for the window before.
		const { clean } = this;
		const isNext = first >= clean.from && first <= clean.to;
		for (let i = isNext ? clean.to + 1 : first; i <= last; i++)
			if (Number.isNaN(samples[i - base])) return null;
		let low = isNext ? Math.max(clean.from, lowest) : first;
		while (low > lowest && !Number.isNaN(samples[low - 1 - base])) low--;
		let high = isNext ? Math.max(clean.to, last) : last;
		while (high < highest && !Number.isNaN(samples[high + 1 - base])) high++;
		this.clean = { from: low, to: high };
		high = Math.min(high, highest);
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
			const centre = first + (span * i) / 15;
			reference.cover(Math.floor(centre - reach), Math.ceil(centre + reach) + 1);
			const { amplitude } = this.phasorAt(centre, this.frequency, LEAST_HALF_CYCLES);
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

/** Slope, cycles per sample, of the parabola through three phases whose whole turns `frequency` tells. */
function parabolaSlope(
	[first, second, third]: [PhaseMark, PhaseMark, PhaseMark],
	frequency: number
): (at: number) => number {
	const earlier = advance(first, second, frequency);
	const later = advance(second, third, frequency);
	const bend = (later - earlier) / (third.centre - first.centre);
	return (at) => earlier + bend * (2 * at - first.centre - second.centre);
}
