import type { Transducer, TransducerKind } from './measuring-chain';

/**
 * Ratio error of current transformers, percent, at percent of the rated primary current; it grows where little flows.
 * source  IEC 61869-2 (from a public listing of its tables); IEEE C57.13 for 0.3, 0.6 and 1.2 (from memory)
 */
const CURRENT_CLASSES: Record<string, readonly (readonly [load_pct: number, error_pct: number])[]> = {
	'0.1': [
		[5, 0.4],
		[20, 0.2],
		[100, 0.1]
	],
	'0.2': [
		[5, 0.75],
		[20, 0.35],
		[100, 0.2]
	],
	'0.3': [
		[10, 0.6],
		[100, 0.3]
	],
	'0.5': [
		[5, 1.5],
		[20, 0.75],
		[100, 0.5]
	],
	'0.6': [
		[10, 1.2],
		[100, 0.6]
	],
	'1': [
		[5, 3],
		[20, 1.5],
		[100, 1]
	],
	'1.2': [
		[10, 2.4],
		[100, 1.2]
	],
	'3': [[50, 3]],
	'5': [[50, 5]]
};

/** Any other error grows as that of class 1 does. */
function classTable(error_pct: number) {
	const known = CURRENT_CLASSES[String(error_pct)];
	if (known !== undefined) return known;
	return CURRENT_CLASSES['1']!.map(([load_pct, error]) => [load_pct, error * error_pct] as const);
}

/**
 * Bound of the ratio error of a current transformer at a load.
 * load_pct  rms current in percent of the rated primary current; null or 0 = not known, the lowest tabulated load is taken
 * returns   percent of reading; between tabulated loads on a straight line, below the lowest one a constant error in
 *           amperes (the standard bounds nothing there: assumption of this product)
 */
export function currentTransformerError_pct(error_pct: number, load_pct: number | null): number {
	const table = classTable(error_pct);
	const lowest = table[0]!;
	if (load_pct === null || !(load_pct > 0)) return lowest[1];
	if (load_pct <= lowest[0]) return (lowest[1] * lowest[0]) / load_pct;
	for (let i = 1; i < table.length; i++) {
		const [from, errorFrom] = table[i - 1]!;
		const [to, errorTo] = table[i]!;
		if (load_pct <= to) return errorFrom + ((load_pct - from) / (to - from)) * (errorTo - errorFrom);
	}
	return table[table.length - 1]![1];
}

/** Bound of a transducer's ratio error at power frequency, percent of reading. load_A is the rms current; null = not known. */
export function ratioError_pct(transducer: Transducer, load_A: number | null): number {
	const { kind, error_pct, ratedPrimary_A } = transducer;
	if (kind !== 'current-transformer') return error_pct;
	const load_pct = load_A === null || ratedPrimary_A === null ? null : (100 * load_A) / ratedPrimary_A;
	return currentTransformerError_pct(error_pct, load_pct);
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
	'not-known': { at50th_pct: 3, reach_Hz: Infinity }
};

/**
 * Bound of what a transducer errs at an order beyond its class, percent of reading.
 * returns  null where it is not known
 */
export function responseError_pct(kind: TransducerKind, order: number, nominal_Hz: 50 | 60): number | null {
	const { at50th_pct, reach_Hz } = RESPONSE[kind];
	if (order * nominal_Hz > reach_Hz) return null;
	return (at50th_pct * (order - 1)) / 49;
}
