import { calibrationState, type CalibrationState } from '../../register/instrument-facts';
import type { Db } from '../db/database';
import { soonUntil } from './calibration-filter';

export interface CalibrationDue {
	kind: 'instrument' | 'sensor';
	id: string;
	name: string;
	dueOn: string;
	calibration: CalibrationState;
	/** A capture was taken with it, or a survey names it, within RECENT_DAYS. */
	inUse: boolean;
}

export interface CalibrationDueList {
	today: string;
	/** What is in use first, then by the due day. */
	due: CalibrationDue[];
	/** More than are shown. */
	more: number;
	/** Whether the practice has registered anything that could fall due. */
	registered: boolean;
}

const RECENT_DAYS = 180;
const SHOWN = 8;
const DAY_MS = 86_400_000;

interface DueRow {
	kind: CalibrationDue['kind'];
	id: string;
	name: string;
	due_on: string;
	in_use: 0 | 1;
}

/** Instruments and sensors whose calibration is overdue or due within 60 days. Archived ones are left out. */
export async function calibrationsDue(
	db: Db,
	practiceId: string,
	today: string
): Promise<CalibrationDueList> {
	const since = new Date(Date.parse(`${today}T00:00:00Z`) - RECENT_DAYS * DAY_MS).toISOString();
	const rows: DueRow[] = await db.raw(
		`with used as (
			select coalesce(c.instrument_id, s.instrument_id) as id from captures c join surveys s on s.id = c.survey_id
				where c.practice_id = :practiceId and c.removed_at is null
					and coalesce(c.started_at, c.created_at) >= :since
			union
			select instrument_id from surveys where practice_id = :practiceId and created_at >= :since
		)
		select 'instrument' as kind, i.id, i.name, max(k.due_on) as due_on, i.id in (select id from used) as in_use
			from instruments i join calibrations k on k.instrument_id = i.id
			where i.practice_id = :practiceId and i.archived_at is null
			group by i.id, i.name having max(k.due_on) <= :soon
		union all
		select 'sensor', n.id, n.name, max(k.due_on),
				exists (select 1 from instrument_channels h where h.sensor_id = n.id
					and h.instrument_id in (select id from used))
			from sensors n join calibrations k on k.sensor_id = n.id
			where n.practice_id = :practiceId and n.archived_at is null
			group by n.id, n.name having max(k.due_on) <= :soon
		order by in_use desc, due_on, name collate nocase`,
		{ practiceId, since, soon: soonUntil(today) }
	);
	return {
		today,
		due: rows.slice(0, SHOWN).map((row) => ({
			kind: row.kind,
			id: row.id,
			name: row.name,
			dueOn: row.due_on,
			calibration: calibrationState(row.due_on, today),
			inUse: row.in_use === 1
		})),
		more: Math.max(0, rows.length - SHOWN),
		registered:
			(await db('instruments').where({ practice_id: practiceId }).whereNull('archived_at').first('id')) !==
			undefined
	};
}
