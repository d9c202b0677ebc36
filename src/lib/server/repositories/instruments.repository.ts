import type { CalibrationFacts, InstrumentFacts } from '../../register/instrument-facts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { CalibrationRow, InstrumentRow } from '../db/rows';
import type { Scope } from './scope';

function columns(facts: InstrumentFacts) {
	return {
		name: facts.name,
		model: facts.model,
		serial_number: facts.serialNumber,
		harmonic_class: facts.harmonicClass,
		channels: facts.channels,
		sensors: facts.sensors,
		current_sensor_error_pct: facts.currentSensorError_pct,
		voltage_sensor_error_pct: facts.voltageSensorError_pct,
		notes: facts.notes
	};
}

/** Instruments and their calibrations. They belong to the practice; no client sees them. */
export function instrumentsRepository(db: Db, scope: Pick<Scope, 'practiceId'>) {
	const mine = () => db('instruments').where({ practice_id: scope.practiceId });

	return {
		byId: (id: string): Promise<InstrumentRow | undefined> => mine().where({ id }).first(),

		inUse: (): Promise<InstrumentRow[]> => mine().whereNull('archived_at').orderBy('name'),

		calibrations: (instrumentId: string): Promise<CalibrationRow[]> =>
			db('calibrations')
				.where({ practice_id: scope.practiceId, instrument_id: instrumentId })
				.orderBy('calibrated_on', 'desc'),

		async add(facts: InstrumentFacts, at: string): Promise<string> {
			const id = newId();
			await db('instruments').insert({
				id,
				practice_id: scope.practiceId,
				...columns(facts),
				created_at: at,
				archived_at: null
			});
			return id;
		},

		async update(id: string, facts: InstrumentFacts): Promise<void> {
			await mine().where({ id }).update(columns(facts));
		},

		async setArchived(id: string, at: string | null): Promise<void> {
			await mine().where({ id }).update({ archived_at: at });
		},

		async addCalibration(instrumentId: string, facts: CalibrationFacts, at: string): Promise<string> {
			const id = newId();
			await db('calibrations').insert({
				id,
				practice_id: scope.practiceId,
				instrument_id: instrumentId,
				certificate_number: facts.certificateNumber,
				laboratory: facts.laboratory,
				calibrated_on: facts.calibratedOn,
				due_on: facts.dueOn,
				created_at: at
			});
			return id;
		}
	};
}
