import type { InputFacts, InstrumentFacts } from '../../register/instrument-facts';
import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { InstrumentChannelRow, InstrumentRow } from '../db/rows';
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

export function toInputFacts(row: InstrumentChannelRow): InputFacts {
	return {
		name: row.name,
		quantity: row.quantity,
		rangeRms: row.range_rms,
		rangeUnit: row.range_unit,
		resolution_bits: row.resolution_bits,
		sensorId: row.sensor_id
	};
}

/** Instruments and their inputs. They belong to the practice; no client sees them. */
export function instrumentsRepository(db: Db, scope: Pick<Scope, 'practiceId'>) {
	const mine = () => db('instruments').where({ practice_id: scope.practiceId });

	/** The list as it now is; nothing refers to an input by its id. */
	async function setInputs(instrumentId: string, inputs: readonly InputFacts[]): Promise<void> {
		const own = { practice_id: scope.practiceId, instrument_id: instrumentId };
		await db('instrument_channels').where(own).delete();
		for (const [position, input] of inputs.entries())
			await db('instrument_channels').insert({
				...own,
				id: newId(),
				position,
				name: input.name,
				quantity: input.quantity,
				range_rms: input.rangeRms,
				range_unit: input.rangeUnit,
				resolution_bits: input.resolution_bits,
				sensor_id: input.sensorId
			});
	}

	return {
		byId: (id: string): Promise<InstrumentRow | undefined> => mine().where({ id }).first(),

		inUse: (): Promise<InstrumentRow[]> => mine().whereNull('archived_at').orderBy('name'),

		/** Of one instrument or of several, each in the order of its terminals. */
		inputs: (instrumentIds: readonly string[]): Promise<InstrumentChannelRow[]> =>
			db('instrument_channels')
				.where({ practice_id: scope.practiceId })
				.whereIn('instrument_id', instrumentIds)
				.orderBy(['instrument_id', 'position']),

		async add(facts: InstrumentFacts, at: string): Promise<string> {
			const id = newId();
			await db('instruments').insert({
				id,
				practice_id: scope.practiceId,
				...columns(facts),
				created_at: at,
				archived_at: null
			});
			await setInputs(id, facts.inputs);
			return id;
		},

		async update(id: string, facts: InstrumentFacts): Promise<void> {
			await mine().where({ id }).update(columns(facts));
			await setInputs(id, facts.inputs);
		},

		async setArchived(id: string, at: string | null): Promise<void> {
			await mine().where({ id }).update({ archived_at: at });
		}
	};
}
