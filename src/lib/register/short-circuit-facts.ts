import { NOT_KNOWN, powerVoltage_V, type ComputedCurrent } from './demand-facts';
import type { PointFacts } from './point-facts';

/** Short-circuit current I_sc at the point: as given, or from fault level or transformer. */
export function computeShortCircuit(
	point: Pick<PointFacts, 'shortCircuit' | 'system' | 'nominalVoltage_V'>
): ComputedCurrent {
	const { shortCircuit } = point;
	switch (shortCircuit.method) {
		case 'unknown':
			return NOT_KNOWN;
		case 'current':
			return { current_A: shortCircuit.shortCircuitCurrent_A, working: [], remarks: [] };
		case 'fault-level':
			return { current_A: shortCircuit.faultLevel_VA / powerVoltage_V(point), working: [], remarks: [] };
		case 'transformer': {
			const own_VA = shortCircuit.rating_VA / (shortCircuit.impedance_pct / 100);
			const upstream_VA = shortCircuit.upstreamFaultLevel_VA;
			const level_VA = upstream_VA === null ? own_VA : 1 / (1 / own_VA + 1 / upstream_VA);
			return { current_A: level_VA / powerVoltage_V(point), working: [], remarks: [] };
		}
	}
}
