import type { Phase } from '../recording/phase';

export type PointSystem = 'single-phase' | 'split-phase' | 'three-wire' | 'four-wire';

/**
 * Nominal voltage of every conductor pair of a point.
 * nominalVoltage_V  line-to-line for three-phase systems; line-to-neutral for single and split phase
 * returns           V by phase; conductors without a nominal voltage (the neutral) are left out
 */
export function nominalVoltagesByPhase_V(
	system: PointSystem,
	nominalVoltage_V: number
): Partial<Record<Phase, number>> {
	switch (system) {
		case 'single-phase':
			return { L1: nominalVoltage_V, L2: nominalVoltage_V, L3: nominalVoltage_V };
		case 'split-phase':
			return { L1: nominalVoltage_V, L2: nominalVoltage_V, L1L2: 2 * nominalVoltage_V };
		case 'three-wire':
		case 'four-wire': {
			const lineToNeutral_V = nominalVoltage_V / Math.sqrt(3);
			return {
				L1: lineToNeutral_V,
				L2: lineToNeutral_V,
				L3: lineToNeutral_V,
				L1L2: nominalVoltage_V,
				L2L3: nominalVoltage_V,
				L3L1: nominalVoltage_V
			};
		}
	}
}
