import type { SensorFacts } from '../../register/sensor-facts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { SensorRow } from '../db/rows';
import type { Scope } from './scope';

export function toSensorFacts(row: SensorRow): SensorFacts {
	const { ratio_primary: primary, ratio_secondary: secondary } = row;
	return {
		name: row.name,
		kind: row.kind,
		serialNumber: row.serial_number,
		ratio:
			primary === null || secondary === null
				? null
				: { primary, secondary, secondaryUnit: row.secondary_unit },
		accuracyClass: row.accuracy_class,
		ratioError_pct: row.ratio_error_pct,
		phaseError_deg: row.phase_error_deg,
		highestFrequency_Hz: row.highest_frequency_hz,
		notes: row.notes
	};
}

function columns(facts: SensorFacts) {
	return {
		name: facts.name,
		kind: facts.kind,
		serial_number: facts.serialNumber,
		ratio_primary: facts.ratio?.primary ?? null,
		ratio_secondary: facts.ratio?.secondary ?? null,
		secondary_unit: facts.ratio?.secondaryUnit ?? 'A',
		accuracy_class: facts.accuracyClass,
		ratio_error_pct: facts.ratioError_pct,
		phase_error_deg: facts.phaseError_deg,
		highest_frequency_hz: facts.highestFrequency_Hz,
		notes: facts.notes
	};
}

/** Sensors of a practice; no client sees them. */
export function sensorsRepository(db: Db, scope: Pick<Scope, 'practiceId'>) {
	const mine = () => db('sensors').where({ practice_id: scope.practiceId });

	return {
		byId: (id: string): Promise<SensorRow | undefined> => mine().where({ id }).first(),

		byIds: (ids: readonly string[]): Promise<SensorRow[]> => mine().whereIn('id', ids).orderBy('name'),

		inUse: (): Promise<SensorRow[]> => mine().whereNull('archived_at').orderBy('name'),

		async add(facts: SensorFacts, at: string): Promise<string> {
			const id = newId();
			await db('sensors').insert({
				id,
				practice_id: scope.practiceId,
				...columns(facts),
				created_at: at,
				archived_at: null
			});
			return id;
		},

		async update(id: string, facts: SensorFacts): Promise<void> {
			await mine().where({ id }).update(columns(facts));
		},

		async setArchived(id: string, at: string | null): Promise<void> {
			await mine().where({ id }).update({ archived_at: at });
		},

		/** Instruments that the sensor is plugged into as a rule. */
		instrumentIds: async (id: string): Promise<string[]> =>
			db('instrument_channels')
				.where({ practice_id: scope.practiceId, sensor_id: id })
				.distinct<{ instrument_id: string }[]>('instrument_id')
				.then((rows) => rows.map((row) => row.instrument_id))
	};
}
