import {
	calibrationValidityDuring,
	type CalibrationValidity,
	type CertificateSpan
} from '../../register/calibration-validity';
import type { Db } from '../db/database';
import type { Scope } from '../repositories/scope';

/** A capture or survey that an instrument was used for. */
export interface InstrumentUse {
	surveyId: string;
	surveyNumber: string;
	surveyTitle: string;
	/** Null for a survey that names the instrument and has no capture of it yet. */
	capture: { id: string; name: string; startedAt: string | null; duration_s: number } | null;
	timeZone: string;
	/** Null where nobody has told when it was taken. */
	calibration: CalibrationValidity<CertificateSpan>['state'] | null;
}

/** How many uses a page shows, the last ones first. */
const SHOWN = 50;

interface UseRow {
	survey_id: string;
	number: string;
	title: string;
	time_zone: string;
	capture_id: string | null;
	name: string | null;
	started_at: string | null;
	duration_s: number | null;
}

/**
 * Captures that an instrument recorded, and surveys that name it and have none of it yet. A capture that names no
 * instrument was taken with the survey's.
 */
export async function instrumentUses(
	db: Db,
	scope: Pick<Scope, 'practiceId'>,
	instrumentId: string,
	certificates: readonly CertificateSpan[]
): Promise<InstrumentUse[]> {
	const rows: UseRow[] = await db.raw(
		`select s.id as survey_id, s.number, s.title, t.time_zone, c.id as capture_id, c.name, c.started_at, c.duration_s
		from surveys s
		join sites t on t.id = s.site_id
		left join captures c on c.survey_id = s.id and c.removed_at is null
			and coalesce(c.instrument_id, s.instrument_id) = :instrumentId
		where s.practice_id = :practiceId and (s.instrument_id = :instrumentId or c.id is not null)
		order by coalesce(c.started_at, s.updated_at) desc, s.number limit ${SHOWN}`,
		{ instrumentId, practiceId: scope.practiceId }
	);
	return rows.map((row) => ({
		surveyId: row.survey_id,
		surveyNumber: row.number,
		surveyTitle: row.title,
		timeZone: row.time_zone,
		capture:
			row.capture_id === null
				? null
				: {
						id: row.capture_id,
						name: row.name ?? '',
						startedAt: row.started_at,
						duration_s: row.duration_s ?? 0
					},
		calibration:
			row.started_at === null
				? null
				: calibrationValidityDuring(
						certificates,
						{ start_ms: Date.parse(row.started_at), duration_s: row.duration_s ?? 0 },
						row.time_zone
					).state
	}));
}
