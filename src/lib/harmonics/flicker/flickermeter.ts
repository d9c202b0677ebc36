import { SectionCascade } from '../../numerics/filters/sections';
import { designPerceptionFilters, type Lamp } from './perception-filters';
import { flickerLevels, longTermSeverity, shortTermSeverity, type FlickerLevels } from './severity';

/** Flicker of one voltage over one ten-minute interval of the clock. */
export interface FlickerInterval {
	/** Milliseconds since 1970-01-01 UTC. */
	start_ms: number;
	pst: number;
	/** Greatest instantaneous flicker. */
	pInstMax: number;
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

/** The squared signal is averaged over whole numbers of samples down to this rate or somewhat more. */
const WORKING_RATE_HZ = 1600;
/** Values of P_inst kept for the statistics; its memory of 0.3 s leaves nothing above a few hertz. */
const KEPT_RATE_HZ = 100;
/** What comes before is shaped by how the filters started, and is not counted. */
export const SETTLING_S = 20;
/** The scaling follows the mean square: 10 … 90 % of a step in one minute. */
const SCALING_TAU_S = 60 / Math.log(9);
/** The scaling starts from the mean square of the first second. */
const FIRST_MEAN_S = 1;
/** An interval with less of it measured gives no severity. The standard asks for all of it and does not say what may be missing. */
const LEAST_MEASURED_S = 570;
const TEN_MINUTES_MS = 600_000;

/**
 * Flickermeter of one voltage. Give it the samples in order, in blocks of any size.
 * error   P_inst and Pst within 1 % of the standard's tables (tests/reference/flicker-*)
 * source  IEC 61000-4-15:2010 (from memory)
 */
export class Flickermeter {
	private readonly thin: number;
	private readonly rate_Hz: number;
	private readonly keepEvery: number;
	private readonly weighting: SectionCascade;
	private readonly memory: SectionCascade;
	private readonly gain: number;
	private readonly scalingShare: number;
	private readonly work: Float64Array;
	private readonly kept = new Float64Array((TEN_MINUTES_MS / 1000) * (2 * KEPT_RATE_HZ));
	private keptCount = 0;
	/** Thinned values so far; the clock. */
	private index = 0;
	private sum = 0;
	private inSum = 0;
	private meanSquare = NaN;
	private first = { sum: 0, count: 0 };
	/** Thinned value from which on P_inst counts. */
	private settledAt = Infinity;
	private current = -1;
	private greatest = NaN;

	constructor(private readonly setup: FlickermeterSetup) {
		this.thin = Math.max(1, Math.floor(setup.samplingRate_Hz / WORKING_RATE_HZ));
		this.rate_Hz = setup.samplingRate_Hz / this.thin;
		this.keepEvery = Math.max(1, Math.floor(this.rate_Hz / KEPT_RATE_HZ));
		const filters = designPerceptionFilters(this.rate_Hz, setup.nominalFrequency_Hz, setup.lamp);
		this.weighting = new SectionCascade(filters.weighting);
		this.memory = new SectionCascade([filters.memory]);
		this.gain = filters.gain;
		this.scalingShare = 1 - Math.exp(-1 / (SCALING_TAU_S * this.rate_Hz));
		this.work = new Float64Array(Math.ceil(4096 / this.thin) + 1);
	}

	/** samples  [from, to) any unit; a missing one (NaN) holds the signal and unsettles the meter */
	push(samples: Float64Array, from = 0, to = samples.length): void {
		for (let at = from; at < to; at += 4096) this.pushPiece(samples, at, Math.min(to, at + 4096));
	}

	/** Greatest instantaneous flicker since the meter settled; NaN before. */
	get pInstMax(): number {
		return this.greatest;
	}

	/** Ends the record: the interval under way is given when enough of it was measured. */
	finish(): void {
		this.close();
		this.current = -1;
	}

	private pushPiece(samples: Float64Array, from: number, to: number): void {
		const { work, thin, index } = this;
		let { sum, inSum } = this;
		let count = 0;
		for (let i = from; i < to; i++) {
			sum += samples[i]! * samples[i]!;
			if (++inSum < thin) continue;
			work[count] = this.scale(sum / thin, index + count);
			count++;
			sum = 0;
			inSum = 0;
		}
		this.sum = sum;
		this.inSum = inSum;
		this.weighting.run(work, count);
		for (let i = 0; i < count; i++) work[i] = work[i]! * work[i]! * this.gain;
		this.memory.run(work, count);
		this.keep(count);
	}

	/** The square over the slow mean square, less one: what is left is the modulation and twice the mains frequency. */
	private scale(square: number, index: number): number {
		if (Number.isNaN(square)) {
			this.settledAt = index + SETTLING_S * this.rate_Hz;
			return 0;
		}
		const { first } = this;
		if (first.count < FIRST_MEAN_S * this.rate_Hz) {
			first.sum += square;
			first.count++;
			this.meanSquare = first.sum / first.count;
			this.settledAt = index + SETTLING_S * this.rate_Hz;
			return first.count < FIRST_MEAN_S * this.rate_Hz ? 0 : square / this.meanSquare - 1;
		}
		this.meanSquare += this.scalingShare * (square - this.meanSquare);
		return this.meanSquare > 0 ? square / this.meanSquare - 1 : 0;
	}

	private keep(count: number): void {
		const { work, keepEvery, rate_Hz } = this;
		const { start_ms } = this.setup;
		for (let i = 0; i < count; i++, this.index++) {
			if (this.index % keepEvery !== 0) continue;
			const interval = Math.floor((start_ms + (1000 * this.index) / rate_Hz) / TEN_MINUTES_MS);
			if (interval !== this.current) {
				this.close();
				this.current = interval;
			}
			if (this.index < this.settledAt) continue;
			const value = work[i]!;
			this.kept[this.keptCount++] = value;
			if (!(value <= this.greatest)) this.greatest = value;
		}
	}

	private close(): void {
		const { kept, keptCount, keepEvery, rate_Hz, current } = this;
		this.keptCount = 0;
		const measured_s = (keptCount * keepEvery) / rate_Hz;
		if (current < 0 || measured_s < LEAST_MEASURED_S) return;
		const sorted = kept.slice(0, keptCount).sort();
		const levels = flickerLevels(sorted);
		this.setup.onInterval({
			start_ms: current * TEN_MINUTES_MS,
			pst: shortTermSeverity(levels),
			pInstMax: sorted[keptCount - 1]!,
			levels,
			measured_s
		});
	}
}

/** Long-term severity of each two hours of the clock, even hours UTC, that hold twelve short-term values. */
export function longTermIntervals(
	intervals: readonly Pick<FlickerInterval, 'start_ms' | 'pst'>[]
): { start_ms: number; plt: number }[] {
	const byTwoHours = new Map<number, number[]>();
	for (const { start_ms, pst } of intervals) {
		const period = Math.floor(start_ms / (12 * TEN_MINUTES_MS));
		byTwoHours.set(period, [...(byTwoHours.get(period) ?? []), pst]);
	}
	return [...byTwoHours]
		.filter(([, values]) => values.length === 12)
		.map(([period, values]) => ({ start_ms: period * 12 * TEN_MINUTES_MS, plt: longTermSeverity(values) }));
}
