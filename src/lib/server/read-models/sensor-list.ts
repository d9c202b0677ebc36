import { calibrationState, type CalibrationState } from '../../register/instrument-facts';
import type { SensorFacts } from '../../register/sensor-facts';
import type { Db } from '../db/database';
import type { SensorRow } from '../db/rows';
import { calibrationsRepository } from '../repositories/calibrations.repository';
import type { Scope } from '../repositories/scope';
import { sensorsRepository, toSensorFacts } from '../repositories/sensors.repository';
import { CALIBRATION_STATE_SQL, lastDueDay, soonUntil } from './calibration-filter';
import { certificateRows, type CertificateRow } from './certificate-rows';
import { likePattern, type ListPage, type ListQuery } from './list-query';

export const SENSOR_SORTS = ['name', 'kind', 'due'] as const;
export type SensorSort = (typeof SENSOR_SORTS)[number];

export interface SensorListQuery extends ListQuery<SensorSort> {
	archived: boolean;
	calibration: CalibrationState | null;
}

export interface SensorListRow extends SensorFacts {
	id: string;
	dueOn: string | null;
	calibration: CalibrationState;
	/** Names of the instruments that it is plugged into. */
	instruments: string[];
}

export interface SensorPage {
	id: string;
	facts: SensorFacts;
	archivedAt: string | null;
	certificates: CertificateRow[];
	dueOn: string | null;
	calibration: CalibrationState;
	today: string;
	inputs: { instrumentId: string; instrument: string; input: string }[];
}

const ORDER: Record<SensorSort, string> = {
	name: 'name collate nocase',
	kind: 'kind',
	due: 'due_on'
};

async function pluggedInto(db: Db, practiceId: string, sensorIds: readonly string[]) {
	return db('instrument_channels as c')
		.join('instruments as i', 'i.id', 'c.instrument_id')
		.where('c.practice_id', practiceId)
		.whereIn('c.sensor_id', sensorIds)
		.orderBy(['i.name', 'c.position'])
		.select<{ sensor_id: string; instrument_id: string; instrument: string; input: string }[]>({
			sensor_id: 'c.sensor_id',
			instrument_id: 'c.instrument_id',
			instrument: 'i.name',
			input: 'c.name'
		});
}

/** Sensors of a practice with the state of their calibration on a day. */
export async function listSensors(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	query: SensorListQuery,
	today: string
): Promise<ListPage<SensorListRow>> {
	const withDue = db('sensors as s')
		.where('s.practice_id', scope.practiceId)
		.select('s.*', {
			due_on: db('calibrations as k').whereRaw('k.sensor_id = s.id').max('k.due_on')
		})
		.as('sensors_due');
	const matching = () => {
		const rows = db.from(withDue.clone());
		void (query.archived ? rows.whereNotNull('archived_at') : rows.whereNull('archived_at'));
		if (query.calibration !== null)
			void rows.andWhereRaw(`(${CALIBRATION_STATE_SQL[query.calibration]})`, {
				today,
				soon: soonUntil(today)
			});
		if (query.q !== '')
			void rows.andWhereRaw(
				"(name like ? escape '\\' or replace(kind, '-', ' ') like ? escape '\\' or serial_number like ? escape '\\')",
				[likePattern(query.q), likePattern(query.q), likePattern(query.q)]
			);
		return rows;
	};
	const counted = await matching().count<{ n: number }[]>({ n: '*' }).first();
	const direction = query.descending ? 'desc' : 'asc';
	const rows = await matching()
		.orderByRaw(`${query.sort === 'due' ? 'due_on is null, ' : ''}${ORDER[query.sort]} ${direction}`)
		.orderBy('id')
		.limit(query.pageSize)
		.offset((query.page - 1) * query.pageSize)
		.select<(SensorRow & { due_on: string | null })[]>('*');
	const plugged = await pluggedInto(
		db,
		scope.practiceId,
		rows.map((row) => row.id)
	);
	return {
		rows: rows.map((row) => ({
			id: row.id,
			...toSensorFacts(row),
			dueOn: row.due_on,
			calibration: calibrationState(row.due_on, today),
			instruments: [
				...new Set(plugged.filter((one) => one.sensor_id === row.id).map((one) => one.instrument))
			]
		})),
		total: counted?.n ?? 0,
		page: query.page,
		pageSize: query.pageSize
	};
}

export async function loadSensorPage(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	sensorId: string,
	today: string
): Promise<SensorPage | null> {
	const sensor = await sensorsRepository(db, scope).byId(sensorId);
	if (!sensor) return null;
	const calibrations = await calibrationsRepository(db, scope).ofSensors([sensorId]);
	const dueOn = lastDueDay(calibrations);
	return {
		id: sensor.id,
		facts: toSensorFacts(sensor),
		archivedAt: sensor.archived_at,
		certificates: certificateRows(calibrations),
		dueOn,
		calibration: calibrationState(dueOn, today),
		today,
		inputs: (await pluggedInto(db, scope.practiceId, [sensorId])).map((one) => ({
			instrumentId: one.instrument_id,
			instrument: one.instrument,
			input: one.input
		}))
	};
}
