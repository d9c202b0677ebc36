import { fitTones, tonesOf } from '../../numerics/frequency/fit-tones';

/** One notch: a short departure of the voltage from the wave without notches, usually while two valves commutate. */
export interface Notch {
	/** Start at half depth, seconds from the first sample. */
	start_s: number;
	/** At half depth. */
	width_us: number;
	/** Mean departure over the width: area/width. */
	depth_V: number;
	/** Greatest departure, ringing included. */
	deepest_V: number;
	/** Depth in percent of the mean reference over the width; NaN near a zero crossing of it, where a share says nothing. */
	depth_pctOfInstantaneous: number;
	area_Vus: number;
	/** Towards zero as a commutation between the measured conductors makes it, or away from it. */
	direction: 'towards-zero' | 'away-from-zero';
}

export interface NotchSurvey {
	notches: Notch[];
	/** [samples] the wave without notches that they are measured against, V. */
	reference: Float64Array;
	/** Peak of the reference's fundamental, V. */
	fundamentalPeak_V: number;
	/** Time between samples. */
	resolution_us: number;
	/** Whether the resolution is 20 µs or finer; otherwise depth, width and area are only indications. */
	isCertain: boolean;
	/** What to know before relying on the figures; null when nothing. */
	caution: string | null;
}

export interface NotchSettings {
	/** Departures below this share of the fundamental's peak are no notches. */
	leastDepth_pctOfPeak?: number;
	/** Orders of the reference. Low ones only: higher orders would follow the notches themselves. */
	orders?: readonly number[];
}

/** Resolution that notch figures need; common practice. */
const CERTAIN_US = 20;
const LEAST_DEPTH_PCT = 5;
const REFERENCE_ORDERS = [1, 3, 5, 7];
/** Longer departures are no commutation. */
const LONGEST_SHARE_OF_CYCLE = 1 / 8;
const PASSES = 12;
/** Nearer to zero than this share of the peak the instantaneous reference is no base for a percentage. */
const LEAST_BASE = 0.05;

/**
 * Finds voltage notches in one or more cycles and measures their width, depth and area.
 *
 * The wave without notches is a constant and low orders, fitted by least squares to the samples outside notches; as those
 * are not known beforehand, fit and choice alternate until they agree.
 *
 * samples         [n] V, evenly spaced, at least one cycle
 * frequency_Hz    of the fundamental, measured
 * returns         null when there is no fundamental, a sample is missing or there is less than a cycle
 * error           noise-free, 2 µs sampling: area 1 %, width one sample; edges between samples are taken as straight
 * source          IEEE Std 519, annex on commutation notches (from memory): area = mean depth × width; mean depth as the
 *                 definition of notch depth
 */
export function findNotches(
	samples: Float64Array,
	samplingRate_Hz: number,
	frequency_Hz: number,
	settings: NotchSettings = {}
): NotchSurvey | null {
	const frequency = frequency_Hz / samplingRate_Hz;
	if (!(samples.length * frequency >= 0.999) || samples.some(Number.isNaN)) return null;
	const least = (settings.leastDepth_pctOfPeak ?? LEAST_DEPTH_PCT) / 100;
	const found = referenceWithoutNotches(samples, frequency, settings.orders ?? REFERENCE_ORDERS, least);
	if (!found) return null;
	const { reference, fundamentalPeak_V } = found;
	const departures = samples.map((value, n) => value - reference[n]!);
	const threshold_V = least * fundamentalPeak_V;
	const step_us = 1e6 / samplingRate_Hz;
	const longest = LONGEST_SHARE_OF_CYCLE / frequency;
	const notches = runsBeyond(departures, threshold_V)
		.filter(({ from, to }) => from > 0 && to < samples.length && to - from <= longest)
		.map((run) => measure(run, departures, reference, step_us, LEAST_BASE * fundamentalPeak_V));
	const isCertain = step_us <= CERTAIN_US * 1.001;
	return {
		notches,
		reference,
		fundamentalPeak_V,
		resolution_us: step_us,
		isCertain,
		caution: isCertain
			? null
			: `The voltage was sampled every ${step_us.toFixed(1)} µs; notches need ${CERTAIN_US} µs or finer. Shallow or narrow ` +
				`ones are missed, and depth, width and area are indications only. Record at ${1e6 / CERTAIN_US / 1000} kHz or more.`
	};
}

function referenceWithoutNotches(
	samples: Float64Array,
	frequency: number,
	orders: readonly number[],
	least: number
): { reference: Float64Array; fundamentalPeak_V: number } | null {
	const isUsed = new Uint8Array(samples.length).fill(1);
	for (let pass = 0; ; pass++) {
		const fit = fitTones(samples, isUsed, frequency, orders);
		if (!fit) return null;
		const at = orders.indexOf(1);
		const fundamentalPeak_V = Math.hypot(fit.cos[at]!, fit.sin[at]!);
		if (!(fundamentalPeak_V > 0)) return null;
		const reference = tonesOf(fit, frequency, samples.length);
		// The first fits are pulled by the notches: what departs less than half of the greatest departure stays for now.
		const departures = samples.map((value, n) => Math.abs(value - reference[n]!));
		const greatest = departures.reduce((a, b) => Math.max(a, b), 0);
		const settled = least * fundamentalPeak_V;
		const bound = Math.max(settled / 2, greatest * 0.5 ** (pass + 1));
		let changes = 0;
		for (let n = 0; n < samples.length; n++) {
			const use = departures[n]! <= bound ? 1 : 0;
			if (use !== isUsed[n]) changes++;
			isUsed[n] = use;
		}
		if ((changes === 0 && bound <= settled) || pass === PASSES) return { reference, fundamentalPeak_V };
	}
}

interface Run {
	from: number;
	/** exclusive */
	to: number;
}

/** Runs of samples beyond the threshold, each on one side. */
function runsBeyond(departures: Float64Array, threshold: number): Run[] {
	const runs: Run[] = [];
	for (let n = 0; n < departures.length; n++) {
		if (Math.abs(departures[n]!) <= threshold) continue;
		const sign = Math.sign(departures[n]!);
		const from = n;
		while (n < departures.length && sign * departures[n]! > threshold) n++;
		runs.push({ from, to: n });
		n--;
	}
	return runs;
}

function measure(
	{ from, to }: Run,
	departures: Float64Array,
	reference: Float64Array,
	step_us: number,
	leastBase_V: number
): Notch {
	const sign = Math.sign(departures[from]!);
	let deepest_V = 0;
	// The edges reach from the last sample outside to the first inside: half of each step belongs to the notch.
	let area = 0;
	let base = 0;
	for (let n = from; n < to; n++) {
		const departure = sign * departures[n]!;
		deepest_V = Math.max(deepest_V, departure);
		area += departure;
		base += reference[n]!;
	}
	const mean = area / (to - from);
	area += (Math.max(0, sign * departures[from - 1]!) + Math.max(0, sign * departures[to]!)) / 2;
	const start = crossing(departures, from - 1, sign, mean / 2);
	const end = crossing(departures, to - 1, sign, mean / 2);
	const width_us = (end - start) * step_us;
	const depth_V = (area * step_us) / width_us;
	const instantaneous_V = base / (to - from);
	return {
		start_s: (start * step_us) / 1e6,
		width_us,
		depth_V,
		deepest_V,
		depth_pctOfInstantaneous:
			Math.abs(instantaneous_V) >= leastBase_V ? (100 * depth_V) / Math.abs(instantaneous_V) : NaN,
		area_Vus: area * step_us,
		direction: sign * instantaneous_V < 0 ? 'towards-zero' : 'away-from-zero'
	};
}

/** Place between sample n and the next where the departure passes a level. */
function crossing(departures: Float64Array, n: number, sign: number, level: number): number {
	const before = sign * departures[n]!;
	const after = sign * departures[n + 1]!;
	const share = (level - before) / (after - before);
	return n + Math.max(0, Math.min(1, share));
}

/** Limits of one kind of low-voltage system. */
export interface NotchLimit {
	system: 'special-applications' | 'general' | 'dedicated';
	depth_pct: number;
	area_Vus: number;
}

/**
 * Limits on notches of low-voltage systems; areas are stated at 480 V and scale with the voltage.
 * ratedVoltage_V  line to line, rms
 * source          IEEE Std 519-1992, table 10.2, repeated in the annex of the 2014 and 2022 editions (from memory).
 *                 Special applications: hospitals, airports; dedicated: systems that feed converters alone
 */
export function notchLimits(ratedVoltage_V: number): NotchLimit[] {
	const scale = ratedVoltage_V / 480;
	return [
		{ system: 'special-applications', depth_pct: 10, area_Vus: 16400 * scale },
		{ system: 'general', depth_pct: 20, area_Vus: 22800 * scale },
		{ system: 'dedicated', depth_pct: 50, area_Vus: 36500 * scale }
	];
}
