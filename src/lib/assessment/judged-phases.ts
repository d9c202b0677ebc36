import type { Phase } from '../recording/phase';
import type { AssessedPoint } from './assessment';

/**
 * Phases on which a quantity is judged. Four-wire points use line-to-neutral voltages, three-wire points
 * line-to-line ones (brief of the trade; IEEE Std 519-2022, 5.1 and EN 50160 speak of the supply's own voltages).
 */
export function judgedPhases(point: Pick<AssessedPoint, 'system'>, quantity: 'voltage' | 'current'): Phase[] {
	switch (point.system) {
		case 'single-phase':
			return ['L1'];
		case 'split-phase':
			return ['L1', 'L2'];
		case 'three-wire':
			return quantity === 'voltage' ? ['L1L2', 'L2L3', 'L3L1'] : ['L1', 'L2', 'L3'];
		case 'four-wire':
			return ['L1', 'L2', 'L3'];
	}
}

/**
 * The nominal voltage between the two conductors that a channel measured: 100 % of an IEEE Std 519 voltage table.
 * returns  V; null for the neutral, which has no nominal voltage
 */
export function nominalVoltageOn_V(
	point: Pick<AssessedPoint, 'system' | 'nominalVoltage_V'>,
	phase: Phase
): number | null {
	const U = point.nominalVoltage_V;
	if (phase === 'N') return null;
	const lineToLine = phase === 'L1L2' || phase === 'L2L3' || phase === 'L3L1';
	switch (point.system) {
		case 'single-phase':
			return U;
		case 'split-phase':
			return lineToLine ? 2 * U : U;
		case 'three-wire':
		case 'four-wire':
			return lineToLine ? U : U / Math.sqrt(3);
	}
}

/** The voltage by which standards choose their tables: between lines where there are three, else the nominal one. */
export function systemVoltage_kV(point: Pick<AssessedPoint, 'nominalVoltage_V'>): number {
	return point.nominalVoltage_V / 1000;
}

/** Short-circuit current ÷ demand current; null while either is not known or is not positive. */
export function shortCircuitRatio(
	point: Pick<AssessedPoint, 'demandCurrent_A' | 'shortCircuitCurrent_A'>
): number | null {
	const { demandCurrent_A, shortCircuitCurrent_A } = point;
	if (demandCurrent_A === null || shortCircuitCurrent_A === null) return null;
	return demandCurrent_A > 0 && shortCircuitCurrent_A > 0 ? shortCircuitCurrent_A / demandCurrent_A : null;
}
