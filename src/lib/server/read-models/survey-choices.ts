import type { Db } from '../db/database';
import type { Scope } from '../repositories/scope';

export interface PointChoice {
	id: string;
	name: string;
	kind: 'pcc' | 'in-plant';
	siteId: string;
	siteName: string;
	clientId: string;
	clientName: string;
	timeZone: string;
}

export interface SurveyChoices {
	/** Points in use, by client, site and name. */
	points: PointChoice[];
	instruments: { id: string; name: string; serialNumber: string; dueOn: string | null }[];
}

/** What a survey can be opened at and measured with; whatever is archived is left out. */
export async function loadSurveyChoices(db: Db, scope: Scope): Promise<SurveyChoices> {
	const points = db('points as p')
		.join('sites as s', 's.id', 'p.site_id')
		.join('clients as c', 'c.id', 'p.client_id')
		.where('p.practice_id', scope.practiceId)
		.whereNull('p.archived_at')
		.whereNull('s.archived_at')
		.whereNull('c.archived_at')
		.orderByRaw('c.name collate nocase, s.name collate nocase, p.name collate nocase');
	if (scope.clientId !== undefined) void points.andWhere('p.client_id', scope.clientId);
	return {
		points: await points.select<PointChoice[]>({
			id: 'p.id',
			name: 'p.name',
			kind: 'p.kind',
			siteId: 's.id',
			siteName: 's.name',
			clientId: 'c.id',
			clientName: 'c.name',
			timeZone: 's.time_zone'
		}),
		instruments: await instrumentChoices(db, scope)
	};
}

export function instrumentChoices(
	db: Db,
	scope: Pick<Scope, 'practiceId'>
): Promise<SurveyChoices['instruments']> {
	return db('instruments as i')
		.where('i.practice_id', scope.practiceId)
		.whereNull('i.archived_at')
		.orderByRaw('i.name collate nocase')
		.select({
			id: 'i.id',
			name: 'i.name',
			serialNumber: 'i.serial_number'
		})
		.select<SurveyChoices['instruments']>(
			db('calibrations as k').whereRaw('k.instrument_id = i.id').max('k.due_on').as('dueOn')
		);
}
