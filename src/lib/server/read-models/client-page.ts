import type { Verdict } from '../../assessment/assessment';
import type { RevisionStatus } from '../../report/revision-status';
import type { Db } from '../db/database';
import type { ClientRow } from '../db/rows';
import type { Scope } from '../repositories/scope';

export interface ClientSiteLine {
	id: string;
	name: string;
	address: string;
	utility: string;
	timeZone: string;
	points: number;
	archivedAt: string | null;
}

export interface SurveyLine {
	id: string;
	number: string;
	title: string;
	status: 'open' | 'closed';
	siteName: string;
	pointName: string;
	pointKind: 'pcc' | 'in-plant';
	verdict: Verdict | null;
	updatedAt: string;
}

export interface ReportLine {
	surveyId: string;
	number: string | null;
	title: string;
	revision: string;
	status: RevisionStatus;
	updatedAt: string;
}

export interface PersonLine {
	name: string;
	email: string;
	/** Null while the invitation is not accepted. */
	since: string | null;
	invitedUntil: string | null;
}

export interface ClientPage {
	client: ClientRow;
	sites: ClientSiteLine[];
	people: PersonLine[];
	surveys: SurveyLine[];
	reports: ReportLine[];
}

/** Surveys of a client, a site or a point with their current verdict, latest first. */
export function surveyLines(
	db: Db,
	scope: Scope,
	of: { 'v.client_id': string } | { 'v.site_id': string } | { 'v.point_id': string }
): Promise<SurveyLine[]> {
	return db('surveys as v')
		.join('sites as s', 's.id', 'v.site_id')
		.join('points as p', 'p.id', 'v.point_id')
		.leftJoin('assessments as a', (on) => {
			on.on('a.survey_id', 'v.id').andOnVal('a.is_current', 1);
		})
		.where('v.practice_id', scope.practiceId)
		.andWhere(of)
		.orderBy('v.updated_at', 'desc')
		.select<SurveyLine[]>({
			id: 'v.id',
			number: 'v.number',
			title: 'v.title',
			status: 'v.status',
			siteName: 's.name',
			pointName: 'p.name',
			pointKind: 'p.kind',
			verdict: 'a.verdict',
			updatedAt: 'v.updated_at'
		});
}

async function people(db: Db, scope: Scope, clientId: string): Promise<PersonLine[]> {
	const members = await db('memberships as m')
		.join('users as u', 'u.id', 'm.user_id')
		.where({ 'm.practice_id': scope.practiceId, 'm.client_id': clientId })
		.whereNull('m.revoked_at')
		.orderBy('u.name')
		.select<{ name: string; email: string; since: string }[]>({
			name: 'u.name',
			email: 'u.email',
			since: 'm.created_at'
		});
	const invited = await db('invitations as i')
		.where({ 'i.practice_id': scope.practiceId, 'i.client_id': clientId })
		.whereNull('i.accepted_at')
		.whereNull('i.revoked_at')
		.orderBy('i.name')
		.select<{ name: string; email: string; invitedUntil: string }[]>({
			name: 'i.name',
			email: 'i.email',
			invitedUntil: 'i.expires_at'
		});
	return [
		...members.map((member) => ({ ...member, invitedUntil: null })),
		...invited.map((invitation) => ({ ...invitation, since: null }))
	];
}

/** Latest revision of each report of the client. */
function reports(db: Db, scope: Scope, clientId: string): Promise<ReportLine[]> {
	return db('reports as r')
		.join('report_revisions as v', 'v.report_id', 'r.id')
		.where({ 'r.practice_id': scope.practiceId, 'r.client_id': clientId })
		.whereNotExists(
			db('report_revisions as later')
				.whereRaw('later.report_id = r.id')
				.whereRaw(
					'(later.created_at > v.created_at or (later.created_at = v.created_at and later.revision > v.revision))'
				)
				.select(db.raw('1'))
		)
		.orderBy('v.updated_at', 'desc')
		.select<ReportLine[]>({
			surveyId: 'r.survey_id',
			number: 'r.number',
			title: 'r.title',
			revision: 'v.revision',
			status: 'v.status',
			updatedAt: 'v.updated_at'
		});
}

/** All that is kept about one client; null when it is not of this practice. */
export async function loadClientPage(db: Db, scope: Scope, clientId: string): Promise<ClientPage | null> {
	if (scope.clientId !== undefined && scope.clientId !== clientId) return null;
	const client = await db('clients').where({ practice_id: scope.practiceId, id: clientId }).first();
	if (!client) return null;
	const sites: ClientSiteLine[] = await db('sites as s')
		.where({ 's.practice_id': scope.practiceId, 's.client_id': clientId })
		.orderByRaw('s.archived_at is not null, s.name collate nocase')
		.select({
			id: 's.id',
			name: 's.name',
			address: 's.address',
			utility: 's.utility',
			timeZone: 's.time_zone',
			archivedAt: 's.archived_at'
		})
		.select<ClientSiteLine[]>(
			db('points as p').whereRaw('p.site_id = s.id').whereNull('p.archived_at').count('*').as('points')
		);
	return {
		client,
		sites,
		people: await people(db, scope, clientId),
		surveys: await surveyLines(db, scope, { 'v.client_id': clientId }),
		reports: await reports(db, scope, clientId)
	};
}
