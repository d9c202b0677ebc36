import {
	demandSchema,
	phaseNamesSchema,
	shortCircuitSchema,
	type PointFacts,
	type Ratio
} from '../../register/point-facts';
import type { PointRow } from '../db/rows';

function ratio(primary: number | null, secondary: number | null): Ratio | null {
	return primary === null || secondary === null ? null : { primary, secondary };
}

/** The domain's view of a stored point. Throws when the stored text is not what was written: that is our mistake. */
export function toPointFacts(row: PointRow): PointFacts {
	return {
		name: row.name,
		kind: row.kind,
		system: row.system,
		nominalVoltage_V: row.nominal_voltage_v,
		nominalFrequency_Hz: row.nominal_frequency_hz,
		demand: demandSchema.parse(JSON.parse(row.demand_json)),
		shortCircuit: shortCircuitSchema.parse(JSON.parse(row.short_circuit_json)),
		phaseNames: phaseNamesSchema.parse(JSON.parse(row.phase_names_json)),
		currentTransformer: ratio(row.ct_primary_a, row.ct_secondary_a),
		voltageTransformer: ratio(row.vt_primary_v, row.vt_secondary_v),
		limitSetId: row.limit_set_id,
		limitSetReason: row.limit_set_reason,
		notes: row.notes
	};
}
