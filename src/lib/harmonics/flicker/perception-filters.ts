import {
	bilinear,
	butterworthLowPass,
	joinFirstOrder,
	responseMagnitude,
	type AnalogueSection,
	type Section
} from '../../numerics/filters/sections';
import { levelDroop } from '../../numerics/filters/triangular-mean-square';

/** Reference lamp of the perception model. */
export type Lamp = '230 V' | '120 V';

/** Corner frequencies of the weighting filter in Hz (IEC 61000-4-15:2010, block 3; from memory, the tables confirm them). */
const LAMPS: Record<Lamp, { k: number; lambda: number; w1: number; w2: number; w3: number; w4: number }> = {
	'230 V': { k: 1.74802, lambda: 4.05981, w1: 9.15494, w2: 2.27979, w3: 1.22535, w4: 21.9 },
	'120 V': { k: 1.6357, lambda: 4.167375, w1: 9.077169, w2: 2.939902, w3: 1.394468, w4: 17.31512 }
};

/** Swing of a sinusoidal modulation of 8.8 Hz, relative, that gives P_inst,max = 1 (tables 1 and 2, from memory). */
const UNIT_SWING: Record<Lamp, number> = { '230 V': 0.0025, '120 V': 0.00321 };
const UNIT_MODULATION_HZ = 8.8;
const HIGH_PASS_HZ = 0.05;
/** Time constant of the last low-pass: the memory of the brain. */
export const MEMORY_S = 0.3;

export interface PerceptionFilters {
	/** High-pass with the levelling of the droop that thinning left, low-pass and weighting, in a row. */
	weighting: Section[];
	/** Low-pass after the squarer. */
	memory: Section;
	/** Factor that makes P_inst,max of the unit modulation 1. */
	gain: number;
}

/**
 * Filters between the first squarer and the classifier.
 * rate_Hz  rate of the squared, thinned signal; 800 Hz and more
 * thinned  factor by which triangular means thinned it; 1 where it was not
 * error    1600 Hz: the response from 0.5 Hz to 35 Hz (50 Hz mains), 40 Hz (60 Hz mains) is within 0.2 % of the analogue one
 * source   IEC 61000-4-15:2010, blocks 3 and 4 (from memory): 0.05 Hz high-pass, sixth-order Butterworth low-pass of 35 Hz
 *          (50 Hz mains) or 42 Hz (60 Hz mains), weighting k·ω1·s/(s²+2λs+ω1²)·(1+s/ω2)/((1+s/ω3)(1+s/ω4)), 300 ms
 */
export function designPerceptionFilters(
	rate_Hz: number,
	nominalFrequency_Hz: 50 | 60,
	lamp: Lamp,
	thinned = 1
): PerceptionFilters {
	const corner_Hz = nominalFrequency_Hz === 50 ? 35 : 42;
	const highPass = bilinear(
		{ n0: 0, n1: 1, n2: 0, d0: 2 * Math.PI * HIGH_PASS_HZ, d1: 1, d2: 0 },
		rate_Hz,
		0
	);
	const [resonance, lag] = weightingSections(lamp);
	const shaping = [
		...butterworthLowPass(6, corner_Hz).map((section) => bilinear(section, rate_Hz, corner_Hz)),
		bilinear(resonance, rate_Hz, LAMPS[lamp].w1),
		// Flat where the eye is keenest, and steepest at the upper end: that is where the two have to agree.
		bilinear(lag, rate_Hz, corner_Hz)
	];
	const memory = bilinear({ n0: 1, n1: 0, n2: 0, d0: 1, d1: MEMORY_S, d2: 0 }, rate_Hz, 0);
	// What thinning takes and levelling gives cancel, and neither counts.
	const amplitude = UNIT_SWING[lamp] * responseMagnitude([highPass, ...shaping], rate_Hz, UNIT_MODULATION_HZ);
	// The square of a sine is a constant and a ripple of twice its frequency, which the memory lets through in part.
	const ripple = responseMagnitude([memory], rate_Hz, 2 * UNIT_MODULATION_HZ);
	const weighting = [joinFirstOrder(highPass, levelDroop(thinned)), ...shaping];
	return { weighting, memory, gain: 1 / ((amplitude ** 2 / 2) * (1 + ripple)) };
}

/** The resonance near 9 Hz, and the lead and lags around it. */
function weightingSections(lamp: Lamp): [AnalogueSection, AnalogueSection] {
	const { k, lambda, w1, w2, w3, w4 } = LAMPS[lamp];
	const turn = 2 * Math.PI;
	return [
		{ n0: 0, n1: k * turn * w1, n2: 0, d0: (turn * w1) ** 2, d1: 2 * turn * lambda, d2: 1 },
		{
			n0: 1,
			n1: 1 / (turn * w2),
			n2: 0,
			d0: 1,
			d1: 1 / (turn * w3) + 1 / (turn * w4),
			d2: 1 / (turn * w3 * turn * w4)
		}
	];
}
