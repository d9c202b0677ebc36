import {
	calibrationState,
	type CalibrationState,
	type InstrumentFacts
} from '../../register/instrument-facts';
import type { SensorFacts } from '../../register/sensor-facts';
import type { Db } from '../db/database';
import type { InstrumentChannelRow, InstrumentRow } from '../db/rows';
import { calibrationsRepository, toCertificateSpan } from '../repositories/calibrations.repository';
import { instrumentsRepository, toInputFacts } from '../repositories/instruments.repository';
import type { Scope } from '../repositories/scope';
import { sensorsRepository, toSensorFacts } from '../repositories/sensors.repository';
import { CALIBRATION_STATE_SQL, lastDueDay, soonUntil } from './calibration-filter';
import { certificateRows, type CertificateRow } from './certificate-rows';
import { instrumentUses, type InstrumentUse } from './instrument-use';
import { likePattern, type ListPage, type ListQuery } from './list-query';

export const INSTRUMENT_SORTS = ['name', 'due'] as const;
export type InstrumentSort = (typeof INSTRUMENT_SORTS)[number];

export interface InstrumentListQuery extends ListQuery<InstrumentSort> {
	archived: boolean;
	calibration: CalibrationState | null;
}

export interface InstrumentListRow {
	id: string;
	name: string;
	model: string;
	serialNumber: string;
	harmonicClass: InstrumentRow['harmonic_class'];
	dueOn: string | null;
	calibration: CalibrationState;
	archivedAt: string | null;
}

export interface InstrumentPage {
	id: string;
	facts: InstrumentFacts;
	archivedAt: string | null;
	certificates: CertificateRow[];
	dueOn: string | null;
	calibration: CalibrationState;
	today: string;
	/** Sensors plugged into its inputs, by id, with the state of their own calibration. */
	sensors: Record<string, SensorFacts & { dueOn: string | null; calibration: CalibrationState }>;
	uses: InstrumentUse[];
}

/** Instruments of a practice with the state of their calibration on a day. */
export async function listInstruments(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	query: InstrumentListQuery,
	today: string
): Promise<ListPage<InstrumentListRow>> {
	const withDue = db('instruments as i')
		.where('i.practice_id', scope.practiceId)
		.select('i.*', {
			due_on: db('calibrations as k').whereRaw('k.instrument_id = i.id').max('k.due_on')
		})
		.as('instruments_due');
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
				"(name like ? escape '\\' or model like ? escape '\\' or serial_number like ? escape '\\')",
				[likePattern(query.q), likePattern(query.q), likePattern(query.q)]
			);
		return rows;
	};
	const counted = await matching().count<{ n: number }[]>({ n: '*' }).first();
	const direction = query.descending ? 'desc' : 'asc';
	const rows = await matching()
		.orderByRaw(
			query.sort === 'due' ? `due_on is null, due_on ${direction}` : `name collate nocase ${direction}`
		)
		.limit(query.pageSize)
		.offset((query.page - 1) * query.pageSize)
		.select<(InstrumentRow & { due_on: string | null })[]>('*');
	return {
		rows: rows.map((row) => ({
			id: row.id,
			name: row.name,
			model: row.model,
			serialNumber: row.serial_number,
			harmonicClass: row.harmonic_class,
			dueOn: row.due_on,
			calibration: calibrationState(row.due_on, today),
			archivedAt: row.archived_at
		})),
		total: counted?.n ?? 0,
		page: query.page,
		pageSize: query.pageSize
	};
}

export function toInstrumentFacts(
	row: InstrumentRow,
	inputs: readonly InstrumentChannelRow[]
): InstrumentFacts {
	return {
		name: row.name,
		model: row.model,
		serialNumber: row.serial_number,
		harmonicClass: row.harmonic_class,
		channels: row.channels,
		sensors: row.sensors,
		inputs: inputs.map(toInputFacts),
		currentSensorError_pct: row.current_sensor_error_pct,
		voltageSensorError_pct: row.voltage_sensor_error_pct,
		notes: row.notes
	};
}

export async function loadInstrumentPage(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	instrumentId: string,
	today: string
): Promise<InstrumentPage | null> {
	const instruments = instrumentsRepository(db, scope);
	const instrument = await instruments.byId(instrumentId);
	if (!instrument) return null;
	const inputs = await instruments.inputs([instrumentId]);
	const calibrations = await calibrationsRepository(db, scope).ofInstruments([instrumentId]);
	const dueOn = lastDueDay(calibrations);
	return {
		id: instrument.id,
		facts: toInstrumentFacts(instrument, inputs),
		archivedAt: instrument.archived_at,
		certificates: certificateRows(calibrations),
		dueOn,
		calibration: calibrationState(dueOn, today),
		today,
		sensors: await sensorsOf(db, scope, inputs, today),
		uses: await instrumentUses(db, scope, instrumentId, calibrations.map(toCertificateSpan))
	};
}

async function sensorsOf(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	inputs: readonly InstrumentChannelRow[],
	today: string
): Promise<InstrumentPage['sensors']> {
	const ids = inputs.flatMap((input) => input.sensor_id ?? []);
	const rows = await sensorsRepository(db, scope).byIds(ids);
	const calibrations = await calibrationsRepository(db, scope).ofSensors(ids);
	return Object.fromEntries(
		rows.map((row) => {
			const dueOn = lastDueDay(calibrations.filter((one) => one.sensor_id === row.id));
			return [row.id, { ...toSensorFacts(row), dueOn, calibration: calibrationState(dueOn, today) }];
		})
	);
}
