import { computeShortCircuit as shortCircuitOf, type ShortCircuitSource } from '../assessment/short-circuit';
import { NOT_KNOWN, type ComputedCurrent } from './demand-facts';
import type { PointFacts, ShortCircuit } from './point-facts';

function sourceOf(shortCircuit: Exclude<ShortCircuit, { method: 'unknown' }>): ShortCircuitSource {
	switch (shortCircuit.method) {
		case 'current':
			return { kind: 'given', shortCircuitCurrent_A: shortCircuit.shortCircuitCurrent_A };
		case 'fault-level':
			return { kind: 'fault-level', faultLevel_VA: shortCircuit.faultLevel_VA };
		case 'transformer':
			return {
				kind: 'transformer',
				rating_VA: shortCircuit.rating_VA,
				impedance_pct: shortCircuit.impedance_pct,
				upstreamFaultLevel_VA: shortCircuit.upstreamFaultLevel_VA
			};
	}
}

/** Short-circuit current I_sc at a point: as given, or from fault level or transformer. */
export function computeShortCircuit(
	point: Pick<PointFacts, 'shortCircuit' | 'system' | 'nominalVoltage_V'>
): ComputedCurrent {
	if (point.shortCircuit.method === 'unknown') return NOT_KNOWN;
	const computed = shortCircuitOf(sourceOf(point.shortCircuit), point);
	return computed.ok
		? {
				current_A: computed.value.shortCircuitCurrent_A,
				working: computed.value.working,
				remarks: computed.value.assumptions
			}
		: { ...NOT_KNOWN, remarks: [computed.problem] };
}
