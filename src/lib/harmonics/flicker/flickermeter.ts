import { SectionCascade } from '../../numerics/filters/sections';
import { TriangularMeanSquare } from '../../numerics/filters/triangular-mean-square';
import { designPerceptionFilters, type Lamp } from './perception-filters';
import { flickerLevels, longTermSeverity, shortTermSeverity, type FlickerLevels } from './severity';

/** Flicker of one voltage over one ten-minute interval of the clock, or over what was measured of it. */
export interface FlickerInterval {
	/** Start of the ten minutes, milliseconds since 1970-01-01 UTC. */
	start_ms: number;
	/** Short-term severity; NaN when too little of the interval was measured: then the figures below are all there is. */
	pst: number;
	/** Greatest instantaneous flicker. */
	pInstMax: number;
	/** P0.1, P1s, P3s, P10s and P50s: levels of P_inst exceeded for so many percent of what was measured. */
	levels: FlickerLevels;
	/** Seconds of the interval that were measured and settled. */
	measured_s: number;
}

export interface FlickermeterSetup {
	/** 2 kHz and more. */
	samplingRate_Hz: number;
	nominalFrequency_Hz: 50 | 60;
	lamp: Lamp;
	/** Instant of the first sample, milliseconds since 1970-01-01 UTC. */
	start_ms: number;
	onInterval: (interval: FlickerInterval) => void;
}

/** Mean squares are taken at this rate or somewhat more. */
const WORKING_RATE_HZ = 1600;
/** Lowest sampling rate that carries what the meter looks at (common practice). */
export const LEAST_SAMPLING_RATE_HZ = 2000;
/** Values of P_inst kept for the statistics; its memory of 0.3 s leaves little above a few hertz. */
const KEPT_RATE_HZ = 90;
/** Samples taken in one go: what is worked on stays in the cache. */
const PIECE = 4096;
/**
 * Seconds after the first mean, and after missing samples, that are not counted. Six time constants of the slowest filter
 * (0.05 Hz: 3.2 s): of a start in the middle of a wave less than a quarter of a percent is left.
 */
export const SETTLING_S = 20;
/** The scaling follows the mean square: 10 … 90 % of a step in one minute. */
const SCALING_TAU_S = 60 / Math.log(9);
/** The scaling starts from the mean square of the first second. */
const FIRST_MEAN_S = 1;
/** An interval with less of it measured gives no severity. The standard asks for all of it and does not say what may be missing. */
const LEAST_MEASURED_S = 570;
const TEN_MINUTES_MS = 600_000;

/**
 * Flickermeter of one voltage. Give it the samples in order, in blocks of any size: the figures are the same to the last bit.
 * Squares are averaged down to the working rate before anything else: flicker is what lies near zero in the squared voltage,
 * so only the square may be thinned, and harmonics may not be filtered from the voltage, for pairs of them flicker too.
 * error   P_inst within 1 % and Pst within 0.25 % of the tables of the standard (tests/reference/flicker-*)
 * throws  RangeError when the sampling rate is below 2 kHz
 * source  IEC 61000-4-15:2010 (from memory)
 */
export class Flickermeter {
	private readonly rate_Hz: number;
	private readonly keepEvery: number;
	private readonly meanSquares: TriangularMeanSquare;
	private readonly weighting: SectionCascade;
	private readonly memory: SectionCascade;
	private readonly gain: number;
	private readonly scalingShare: number;
	private readonly work: Float64Array;
	/** Whether each value of `work` is measured and settled. */
	private readonly counts: Uint8Array;
	private readonly kept: Float64Array;
	private keptCount = 0;
	/** Values measured and settled in the interval under way. */
	private measured = 0;
	private intervalMax = -Infinity;
	private overallMax = NaN;
	/** Values at the working rate so far; the clock. */
	private index = 0;
	private scale = NaN;
	private first = { sum: 0, count: 0 };
	/** Value from which on P_inst counts. */
	private settledAt = Infinity;
	/** Interval under way, counted from 1970, and the value it ends before. */
	private interval: number;
	private intervalEnd: number;

	constructor(private readonly setup: FlickermeterSetup) {
		const { samplingRate_Hz, nominalFrequency_Hz, lamp, start_ms } = setup;
		if (!(samplingRate_Hz >= LEAST_SAMPLING_RATE_HZ))
			throw new RangeError(`A flickermeter needs 2 kHz or more, not ${samplingRate_Hz} Hz`);
		const factor = Math.max(1, Math.floor(samplingRate_Hz / WORKING_RATE_HZ));
		this.rate_Hz = samplingRate_Hz / factor;
		// Odd: the ripple of a modulation of a round frequency is not met at the same few phases over and over.
		this.keepEvery = Math.floor(this.rate_Hz / KEPT_RATE_HZ) | 1;
		const filters = designPerceptionFilters(this.rate_Hz, nominalFrequency_Hz, lamp, factor);
		this.meanSquares = new TriangularMeanSquare(factor);
		this.weighting = new SectionCascade(filters.weighting);
		this.memory = new SectionCascade([filters.memory]);
		this.gain = filters.gain;
		this.scalingShare = 1 - Math.exp(-1 / (SCALING_TAU_S * this.rate_Hz));
		this.work = new Float64Array(Math.ceil(PIECE / factor) + 1);
		this.counts = new Uint8Array(this.work.length);
		this.kept = new Float64Array(Math.ceil(((TEN_MINUTES_MS / 1000) * this.rate_Hz) / this.keepEvery) + 1);
		this.interval = Math.floor(start_ms / TEN_MINUTES_MS);
		this.intervalEnd = this.endOf(this.interval);
	}

	/** samples  [from, to) any unit; a missing one (NaN) holds the signal and unsettles the meter */
	push(samples: Float64Array, from = 0, to = samples.length): void {
		for (let at = from; at < to; at += PIECE) this.pushPiece(samples, at, Math.min(to, at + PIECE));
	}

	/** Greatest instantaneous flicker since the meter settled; NaN before. */
	get pInstMax(): number {
		return this.overallMax;
	}

	/** Ends the record: the interval under way is given, with a severity when enough of it was measured. */
	finish(): void {
		this.closeInterval();
	}

	private pushPiece(samples: Float64Array, from: number, to: number): void {
		const { work, gain } = this;
		const count = this.meanSquares.run(samples, from, to, work);
		this.applyScale(count);
		this.weighting.run(work, count);
		for (let i = 0; i < count; i++) work[i] = work[i]! * work[i]! * gain;
		this.memory.run(work, count);
		for (let i = 0; i < count;) {
			const end = Math.min(count, i + this.intervalEnd - this.index);
			this.classify(i, end);
			i = end;
			if (this.index < this.intervalEnd) continue;
			this.closeInterval();
			this.intervalEnd = this.endOf(++this.interval);
		}
	}

	/** The square over the slow mean square, less one: what is left is the modulation and twice the mains frequency. */
	private applyScale(count: number): void {
		const { work, counts, scalingShare } = this;
		for (let i = 0; i < count; i++) {
			const square = work[i]!;
			const at = this.index + i;
			if (Number.isNaN(square)) this.settledAt = at + SETTLING_S * this.rate_Hz;
			else if (Number.isNaN(this.scale)) this.takeFirstMean(square, at);
			else {
				this.scale += scalingShare * (square - this.scale);
				work[i] = square / this.scale - 1;
				counts[i] = at < this.settledAt ? 0 : 1;
				continue;
			}
			work[i] = 0;
			counts[i] = 0;
		}
	}

	/** The scale is the mean of one second; a channel without any voltage gives none, and is measured when it has one. */
	private takeFirstMean(square: number, at: number): void {
		const { first } = this;
		first.sum += square;
		if (++first.count < FIRST_MEAN_S * this.rate_Hz) return;
		if (first.sum > 0) this.scale = first.sum / first.count;
		this.settledAt = at + SETTLING_S * this.rate_Hz;
		this.first = { sum: 0, count: 0 };
	}

	/** Takes P_inst in work[from … to−1] into the statistics of the interval under way. */
	private classify(from: number, to: number): void {
		const { work, counts, keepEvery, kept } = this;
		let { measured, intervalMax, keptCount } = this;
		let untilKept = (keepEvery - (this.index % keepEvery)) % keepEvery;
		for (let i = from; i < to; i++, untilKept--) {
			const isKept = untilKept === 0;
			if (isKept) untilKept = keepEvery;
			if (counts[i] === 0) continue;
			const value = work[i]!;
			measured++;
			if (value > intervalMax) intervalMax = value;
			if (isKept) kept[keptCount++] = value;
		}
		this.measured = measured;
		this.intervalMax = intervalMax;
		this.keptCount = keptCount;
		this.index += to - from;
	}

	private closeInterval(): void {
		const { kept, keptCount, intervalMax } = this;
		const measured_s = this.measured / this.rate_Hz;
		this.keptCount = 0;
		this.measured = 0;
		this.intervalMax = -Infinity;
		if (keptCount === 0) return;
		if (!(intervalMax <= this.overallMax)) this.overallMax = intervalMax;
		const levels = flickerLevels(kept.slice(0, keptCount).sort());
		this.setup.onInterval({
			start_ms: this.interval * TEN_MINUTES_MS,
			pst: measured_s < LEAST_MEASURED_S ? NaN : shortTermSeverity(levels),
			pInstMax: intervalMax,
			levels,
			measured_s
		});
	}

	/** Values at the working rate that come before the end of an interval. */
	private endOf(interval: number): number {
		return Math.ceil((((interval + 1) * TEN_MINUTES_MS - this.setup.start_ms) / 1000) * this.rate_Hz);
	}
}

/** Long-term severity of each two hours of the clock, even hours UTC, that hold twelve short-term values (NaN is none). */
export function longTermIntervals(
	intervals: readonly Pick<FlickerInterval, 'start_ms' | 'pst'>[]
): { start_ms: number; plt: number }[] {
	const byTwoHours = new Map<number, number[]>();
	for (const { start_ms, pst } of intervals) {
		if (Number.isNaN(pst)) continue;
		const period = Math.floor(start_ms / (12 * TEN_MINUTES_MS));
		byTwoHours.set(period, [...(byTwoHours.get(period) ?? []), pst]);
	}
	return [...byTwoHours]
		.filter(([, values]) => values.length === 12)
		.map(([period, values]) => ({ start_ms: period * 12 * TEN_MINUTES_MS, plt: longTermSeverity(values) }));
}
