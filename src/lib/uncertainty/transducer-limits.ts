import type { Transducer, TransducerKind } from './measuring-chain';

/** Bounds at one load: percent of the rated primary current, ratio error in percent, phase displacement in minutes of arc. */
type AtLoad = readonly [load_pct: number, error_pct: number, displacement_min: number];

/**
 * Ratio error and phase displacement of current transformers; both grow where little flows. Classes 3 and 5 bound no
 * displacement (NaN).
 * source  IEC 61869-2 (from public listings of its tables); IEEE C57.13 for 0.3, 0.6 and 1.2 (from memory, the
 *         displacement from the corners of its parallelograms: 2600 minutes times twice the bound of the correction factor)
 */
const CURRENT_CLASSES: Record<string, readonly AtLoad[]> = {
	'0.1': [
		[5, 0.4, 15],
		[20, 0.2, 8],
		[100, 0.1, 5]
	],
	'0.2': [
		[5, 0.75, 30],
		[20, 0.35, 15],
		[100, 0.2, 10]
	],
	'0.3': [
		[10, 0.6, 31.2],
		[100, 0.3, 15.6]
	],
	'0.5': [
		[5, 1.5, 90],
		[20, 0.75, 45],
		[100, 0.5, 30]
	],
	'0.6': [
		[10, 1.2, 62.4],
		[100, 0.6, 31.2]
	],
	'1': [
		[5, 3, 180],
		[20, 1.5, 90],
		[100, 1, 60]
	],
	'1.2': [
		[10, 2.4, 124.8],
		[100, 1.2, 62.4]
	],
	'3': [[50, 3, NaN]],
	'5': [[50, 5, NaN]]
};

/** Any other error grows as that of class 1 does, and its displacement with it. */
function classTable(error_pct: number): readonly AtLoad[] {
	const known = CURRENT_CLASSES[String(error_pct)];
	if (known !== undefined) return known;
	return CURRENT_CLASSES['1']!.map(
		([load_pct, error, displacement]) => [load_pct, error * error_pct, displacement * error_pct] as const
	);
}

/** Between tabulated loads on a straight line, below the lowest one inverse to the load: a constant error in amperes. */
function atLoad(table: readonly AtLoad[], load_pct: number | null, column: 1 | 2): number {
	const lowest = table[0]!;
	if (load_pct === null || !(load_pct > 0)) return lowest[column];
	if (load_pct <= lowest[0]) return (lowest[column] * lowest[0]) / load_pct;
	for (let i = 1; i < table.length; i++) {
		const from = table[i - 1]!;
		const to = table[i]!;
		if (load_pct <= to[0])
			return from[column] + ((load_pct - from[0]) / (to[0] - from[0])) * (to[column] - from[column]);
	}
	return table[table.length - 1]![column];
}

/**
 * Bound of the ratio error of a current transformer at a load.
 * load_pct  rms current in percent of the rated primary current; null or 0 = not known, the lowest tabulated load is taken
 * returns   percent of reading; between tabulated loads on a straight line, below the lowest one a constant error in
 *           amperes (the standard bounds nothing there: assumption of this product)
 */
export function currentTransformerError_pct(error_pct: number, load_pct: number | null): number {
	return atLoad(classTable(error_pct), load_pct, 1);
}

/**
 * Bound of the phase displacement of a current transformer at power frequency and a load, treated as its ratio error is.
 * returns  minutes of arc; NaN where its class bounds none
 */
export function currentTransformerDisplacement_min(error_pct: number, load_pct: number | null): number {
	return atLoad(classTable(error_pct), load_pct, 2);
}

/**
 * Phase displacement of voltage transformers, minutes of arc, 80 to 120 % of rated voltage. Class 3 bounds none.
 * source  IEC 61869-3 (from public listings of its table); IEEE C57.13 for 0.3, 0.6 and 1.2 (from memory)
 */
const VOLTAGE_DISPLACEMENTS_MIN: Record<string, number> = {
	'0.1': 5,
	'0.2': 10,
	'0.3': 15.6,
	'0.5': 20,
	'0.6': 31.2,
	'1': 40,
	'1.2': 62.4,
	'3': NaN
};

/** As for a current transformer; another error has that of class 1, multiplied. */
export function voltageTransformerDisplacement_min(error_pct: number): number {
	return VOLTAGE_DISPLACEMENTS_MIN[String(error_pct)] ?? VOLTAGE_DISPLACEMENTS_MIN['1']! * error_pct;
}

/** The rms current in percent of what a current transformer is rated for; null = not known. */
export function loadOf({ ratedPrimary_A }: Transducer, load_A: number | null): number | null {
	return load_A === null || ratedPrimary_A === null ? null : (100 * load_A) / ratedPrimary_A;
}

/**
 * Bound of a transducer's ratio error at power frequency, percent of reading. load_A is the rms current; null = not known.
 * returns  null where nobody has stated its error
 */
export function ratioError_pct(transducer: Transducer, load_A: number | null): number | null {
	const { kind, error_pct } = transducer;
	if (error_pct === null) return null;
	if (kind !== 'current-transformer') return error_pct;
	return currentTransformerError_pct(error_pct, loadOf(transducer, load_A));
}

interface Response {
	/** Additional error at the 50th order, percent of reading; it grows on a straight line from 0 at the 1st. */
	at50th_pct: number;
	/** Above this frequency nothing can be said; Infinity = no such bound up to the 50th order. */
	reach_Hz: number;
}

/**
 * How classes, which hold at power frequency only, are carried on to higher orders. Common practice, and an assumption of
 * this product: no standard gives these figures. IEC TR 61869-103 (as cited in the trade, from memory) finds inductive
 * medium-voltage transformers usable to about 1 kHz and with errors above 100 % at their resonances beyond, capacitive
 * ones unfit above the fundamental, current transformers good within a few percent to 2 or 3 kHz.
 */
export const RESPONSE: Record<TransducerKind, Response> = {
	'inductive-voltage-transformer': { at50th_pct: 5, reach_Hz: 1000 },
	'capacitive-voltage-transformer': { at50th_pct: 0, reach_Hz: 75 },
	'low-voltage-transformer': { at50th_pct: 3, reach_Hz: Infinity },
	'voltage-divider': { at50th_pct: 1, reach_Hz: Infinity },
	'current-transformer': { at50th_pct: 3, reach_Hz: Infinity },
	'current-clamp': { at50th_pct: 3, reach_Hz: Infinity },
	'flexible-coil': { at50th_pct: 1, reach_Hz: Infinity },
	shunt: { at50th_pct: 1, reach_Hz: Infinity },
	'not-known': { at50th_pct: 3, reach_Hz: Infinity }
};

/** Up to where something is known of a transducer: by its kind, or by what was stated where that is less. */
export function reachOf_Hz({ kind, highestFrequency_Hz }: ResponseOf): number {
	return Math.min(RESPONSE[kind].reach_Hz, highestFrequency_Hz ?? Infinity);
}

type ResponseOf = Pick<Transducer, 'kind' | 'highestFrequency_Hz'>;

/**
 * Bound of what a transducer errs at an order beyond its class, percent of reading.
 * returns  null where it is not known
 */
export function responseError_pct(transducer: ResponseOf, order: number, nominal_Hz: 50 | 60): number | null {
	if (order * nominal_Hz > reachOf_Hz(transducer)) return null;
	return (RESPONSE[transducer.kind].at50th_pct * (order - 1)) / 49;
}
