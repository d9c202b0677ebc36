import { LEAST_RECORDED_SHARE } from './interval-group';

/** Power frequency over ten seconds of the clock. */
export interface TenSecondFrequency {
	/** A tick of ten seconds UTC, milliseconds since 1970-01-01. */
	start_ms: number;
	frequency_Hz: number;
	/** Whole cycles that lie in the interval, and how long they took together. */
	cycleCount: number;
	cycles_s: number;
	/** Whether a dip, swell or interruption touched a window in it. */
	flagged: boolean;
}

const LENGTH_MS = 10_000;

/**
 * Power frequency: whole cycles within ten seconds of the clock over their cumulated duration.
 * It takes the crossings of the fundamental, which windows of 10/12 cycles have freed of harmonics, one after the other.
 * An interval with cycles missing for more than 1 % of it has no value.
 * error   time stamps resolve 0.25 µs: below 5 µHz beside the error of the phase
 * source  IEC 61000-4-30:2015, 5.1 (from memory)
 */
export class TenSecondFrequencies {
	private last_ms = NaN;
	private tick = NaN;
	private cycleCount = 0;
	private cycles_s = 0;
	private flagged = false;

	constructor(private readonly onValue: (value: TenSecondFrequency) => void) {}

	/**
	 * Windows in order of time; the part in which two overlap counts once.
	 * window     start, milliseconds since 1970-01-01 UTC, and length of its cycles
	 * phase_deg  absolute phase of the fundamental at the start, cosine convention; NaN (not measured) makes a gap
	 */
	pushWindow(
		window: { start_ms: number; length_s: number; flagged: boolean },
		phase_deg: number,
		cycles: number
	): void {
		const period_s = window.length_s / cycles;
		// cos(2πx + φ) crosses zero upwards where its argument is −90°.
		const first = ((((-90 - phase_deg) / 360) % 1) + 1) % 1;
		if (Number.isNaN(first)) return;
		for (let k = 0; k < cycles; k++) {
			this.pushCrossing(window.start_ms + 1000 * (first + k) * period_s, period_s);
			if (window.flagged) this.flagged = true;
		}
	}

	/**
	 * One upward crossing of the fundamental, in order of time.
	 * period_s  about one cycle; a crossing sooner than half of it repeats the last, one later than one and a half follows a gap
	 */
	pushCrossing(time_ms: number, period_s: number): void {
		const step_s = (time_ms - this.last_ms) / 1000;
		if (step_s < period_s / 2) return;
		const tick = Math.floor(time_ms / LENGTH_MS);
		if (tick !== this.tick) {
			this.close();
			this.tick = tick;
		} else if (step_s < 1.5 * period_s) {
			this.cycleCount++;
			this.cycles_s += step_s;
		}
		this.last_ms = time_ms;
	}

	/** No more crossings will come. */
	finish(): void {
		this.close();
		this.tick = NaN;
		this.last_ms = NaN;
	}

	private close(): void {
		const { cycleCount, cycles_s, flagged } = this;
		if (cycles_s >= (LEAST_RECORDED_SHARE * LENGTH_MS) / 1000) {
			const frequency_Hz = cycleCount / cycles_s;
			this.onValue({ start_ms: this.tick * LENGTH_MS, frequency_Hz, cycleCount, cycles_s, flagged });
		}
		this.cycleCount = 0;
		this.cycles_s = 0;
		this.flagged = false;
	}
}
