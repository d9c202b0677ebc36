import {
	calibrationState,
	DUE_SOON_DAYS,
	type CalibrationState,
	type InstrumentFacts
} from '../../register/instrument-facts';
import type { Db } from '../db/database';
import type { CalibrationRow, InstrumentRow } from '../db/rows';
import type { Scope } from '../repositories/scope';
import { likePattern, type ListPage, type ListQuery } from './list-query';

export const INSTRUMENT_SORTS = ['name', 'due'] as const;
export type InstrumentSort = (typeof INSTRUMENT_SORTS)[number];

export interface InstrumentListQuery extends ListQuery<InstrumentSort> {
	archived: boolean;
	calibration: CalibrationState | null;
}

const STATES: readonly CalibrationState[] = ['valid', 'soon', 'overdue', 'none'];

/** The state asked for in an address; null for none or one that is not known. */
export function parseCalibrationFilter(value: string | null): CalibrationState | null {
	return STATES.find((state) => state === value) ?? null;
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
	calibrations: CalibrationRow[];
	dueOn: string | null;
	calibration: CalibrationState;
	surveys: { id: string; number: string; title: string }[];
}

/** The day DUE_SOON_DAYS after an ISO day. */
function soonUntil(today: string): string {
	const day = new Date(`${today}T00:00:00Z`);
	day.setUTCDate(day.getUTCDate() + DUE_SOON_DAYS);
	return day.toISOString().slice(0, 10);
}

/** The same rule as calibrationState(), as a filter on the last due day. */
const STATE_SQL: Record<CalibrationState, string> = {
	none: 'due_on is null',
	overdue: 'due_on < :today',
	soon: 'due_on >= :today and due_on <= :soon',
	valid: 'due_on > :soon'
};

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
			void rows.andWhereRaw(`(${STATE_SQL[query.calibration]})`, { today, soon: soonUntil(today) });
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

export function toInstrumentFacts(row: InstrumentRow): InstrumentFacts {
	return {
		name: row.name,
		model: row.model,
		serialNumber: row.serial_number,
		harmonicClass: row.harmonic_class,
		channels: row.channels,
		sensors: row.sensors,
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
	const instrument = await db('instruments')
		.where({ practice_id: scope.practiceId, id: instrumentId })
		.first();
	if (!instrument) return null;
	const calibrations = await db('calibrations')
		.where({ practice_id: scope.practiceId, instrument_id: instrumentId })
		.orderBy('calibrated_on', 'desc');
	const dueOn =
		calibrations
			.map((row) => row.due_on)
			.sort()
			.at(-1) ?? null;
	return {
		id: instrument.id,
		facts: toInstrumentFacts(instrument),
		archivedAt: instrument.archived_at,
		calibrations,
		dueOn,
		calibration: calibrationState(dueOn, today),
		surveys: await db('surveys')
			.where({ practice_id: scope.practiceId, instrument_id: instrumentId })
			.orderBy('updated_at', 'desc')
			.limit(20)
			.select('id', 'number', 'title')
	};
}
