import type { InputSensor, MeasuringInstrument } from '../../recording/measuring-input';
import { recorderOf } from '../../register/recorder-match';
import { sensorQuantity, type SensorFacts } from '../../register/sensor-facts';
import { formatSensorRatio, toPrimaryFactor } from '../../register/sensor-ratio';
import type { Db } from '../db/database';
import { instrumentsRepository } from '../repositories/instruments.repository';
import type { Scope } from '../repositories/scope';
import { sensorsRepository, toSensorFacts } from '../repositories/sensors.repository';

/** Without a ratio, only a current transformer is taken to give a current. */
function givesCurrent({ kind, ratio }: SensorFacts): boolean {
	if (sensorQuantity(kind) === 'voltage') return false;
	return ratio === null ? kind === 'current-transformer' : ratio.secondaryUnit === 'A';
}

/** A sensor as the recording's rules need it. */
export function toInputSensor(facts: SensorFacts): InputSensor {
	const { name, kind, ratio } = facts;
	return {
		name,
		toPrimary: ratio && toPrimaryFactor(ratio),
		ratioText: ratio === null ? '' : formatSensorRatio(kind, ratio),
		gives: givesCurrent(facts) ? 'current' : 'voltage',
		ratedPrimary: ratio?.primary ?? null
	};
}

/** An instrument with its inputs and their sensors; null when it is not of the practice. */
export async function measuringInstrument(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	instrumentId: string | null
): Promise<MeasuringInstrument | null> {
	if (instrumentId === null) return null;
	const instruments = instrumentsRepository(db, scope);
	const row = await instruments.byId(instrumentId);
	if (!row) return null;
	const inputs = await instruments.inputs([instrumentId]);
	const sensors = await sensorsRepository(db, scope).byIds(inputs.flatMap((input) => input.sensor_id ?? []));
	return {
		name: row.name,
		inputs: inputs.map(({ name, quantity, sensor_id }) => {
			const sensor = sensors.find((one) => one.id === sensor_id);
			return { name, quantity, sensor: sensor ? toInputSensor(toSensorFacts(sensor)) : null };
		})
	};
}

/** The instrument of the register that a file names as its recorder; null where none fits. */
export async function instrumentNamedBy(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	texts: readonly string[]
): Promise<string | null> {
	const rows = await instrumentsRepository(db, scope).inUse();
	const found = recorderOf(
		texts,
		rows.map((row) => ({ id: row.id, name: row.name, serialNumber: row.serial_number }))
	);
	return found?.id ?? null;
}
