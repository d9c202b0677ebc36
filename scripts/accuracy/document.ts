import { FUNDAMENTALS_HZ, steadyGrid } from '../../src/lib/accuracy/steady-grid';
import { measureMoving, movingCases } from '../../src/lib/accuracy/moving-signals';
import { measureSteady } from '../../src/lib/accuracy/steady-tones';
import { measureState, TESTING_STATES } from '../../src/lib/accuracy/testing-states';
import { measureStep, STEP_CASES } from '../../src/lib/accuracy/voltage-step';
import { ENGINE_VERSION } from '../../src/lib/harmonics/engine-version';
import {
	movingTable,
	roundedTable,
	slowTable,
	stateTable,
	steadyTable,
	stepTable,
	type Measured
} from './tables';

export const DOCUMENT = 'docs/accuracy.md';

/** First lines of the document: what wrote it. */
export function headerOf(version: string): string {
	return `# Accuracy of the analysis\n\nWritten by \`npm run accuracy\` with engine ${version}; not edited by hand.`;
}

const all = <C, E>(cases: readonly C[], measure: (one: C) => E): Measured<C, E> =>
	cases.map((one) => [one, measure(one)] as const);

/** Runs every experiment; two to three minutes. */
export function accuracyDocument(): string {
	const exact = all(steadyGrid(null), measureSteady);
	const states = ([50, 60] as const).flatMap((nominalFrequency_Hz) =>
		TESTING_STATES.map((state) => ({ ...state, nominalFrequency_Hz }))
	);
	return `${headerOf(ENGINE_VERSION)}

Signals of which everything is known go through the same functions as a capture, and what comes out is compared with what went in. Figures are the worst of all orders, channels and windows, rounded up. \`tests/accuracy\` runs a part of each experiment and holds it to the limits. These are errors of the arithmetic; what a recorder and its transformers add is in [uncertainty.md](uncertainty.md).

## Steady tones, samples with all digits

A voltage and a current with orders 1 … 50, 5 % each, pseudo-random phases, 0.75 s. Fundamentals ${FUNDAMENTALS_HZ[50].join(', ')} Hz (windows of 10 cycles) and ${FUNDAMENTALS_HZ[60].join(', ')} Hz (12 cycles), each at every rate that gives 128 samples a cycle or more. Magnitudes are lines and subgroups in percent of the fundamental; phases are referred to the fundamental of the voltage, so that of order 1 is the current's.

${steadyTable(exact)}

Below 128 samples a cycle orders are read up to 45 % of the sampling rate. The signal here holds every order below half the rate, without the anti-alias filter of a recorder: what lies between 45 % and half has its image just beyond half the rate and leaks from there, which no interpolation can part.

${slowTable(exact)}

## Steady tones, samples of 16 bits

The same signals rounded to 2¹⁶ steps over ± 6 times the fundamental's rms. The statistic is the root mean square of the errors of all lines (every order, channel and window). Beside it stands what the rounding explains: the rounding errors themselves, summed at each order over the same window and projected on the order, root mean square in the same way. Where samples repeat from cycle to cycle, rounding repeats as well, and more of it falls on the orders than white noise would put there.

${roundedTable(all(steadyGrid(16), measureSteady))}

## Moving signals

A voltage with orders 1 … 50 of a badly distorted network (0.3 % to 4 %), 3 s, at 12.8 kS/s where nothing else is said. The truth of each window is the exact signal over exactly 10 or 12 cycles of its exact fundamental from the start of that window, transformed without any sampling error; modulation, ramp and interharmonic leak in it as they must. “Share used” is the error over a tenth of the class I limit (0.5 % of reading from 1 % of nominal on, else 0.005 % of nominal; IEC 61000-4-7:2002+A1:2008, table 1, from memory). “Length” is the error of the window's length; 0.03 % is allowed (4.4.1, from memory).

${movingTable(all(movingCases(), measureMoving))}

An interharmonic nearer to the fundamental than a line (5 Hz) cannot be told from a modulation of it in a window; it moves the measured frequency.

## Testing states of IEC 62586-2

States 1 to 3 as far as public sources give them (from memory), without flicker; ten seconds at 12.8 kS/s. Limits are a tenth of class A of IEC 61000-4-30:2015 (from memory). The orders put in are compared with what was put in, and all orders to 50 with the ideal window: the interharmonic reaches other orders in any window of ten or twelve cycles. Unbalance is compared with the symmetrical components of the magnitudes.

${stateTable(all(states, (state) => measureState(state, state.nominalFrequency_Hz)))}

## Steps of the voltage

A sine that changes at a zero crossing for some cycles and returns. Level: lowest or greatest Urms(1/2), class A allows 0.2 % of the declared voltage; duration: class A allows half a cycle at each end (IEC 61000-4-30:2015, 5.4, from memory). A dip or swell of n cycles lasts n + ½ by definition, as values over a whole cycle are refreshed every half; an interruption, whose threshold only whole cycles reach, n − ½.

${stepTable(all(STEP_CASES, measureStep))}
`;
}
