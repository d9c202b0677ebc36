import type { Evidence, Verdict } from '../../assessment/assessment';
import { VERDICTS } from '../../assessment/assessment';
import type { Db } from '../db/database';
import type { Scope } from '../repositories/scope';
import { likePattern, parseListQuery, type ListPage, type ListQuery } from './list-query';

export const SURVEY_SORTS = ['number', 'title', 'client', 'updated'] as const;
export type SurveySort = (typeof SURVEY_SORTS)[number];

/** `none`: surveys that have no verdict yet. */
export type VerdictFilter = Verdict | 'none';

export interface SurveyListQuery extends ListQuery<SurveySort> {
	status: 'open' | 'closed' | null;
	clientId: string | null;
	engineerId: string | null;
	verdict: VerdictFilter | null;
}

export interface SurveyListRow {
	id: string;
	number: string;
	title: string;
	status: 'open' | 'closed';
	clientId: string;
	clientName: string;
	siteName: string;
	pointName: string;
	pointKind: 'pcc' | 'in-plant';
	engineerName: string;
	verdict: Verdict | null;
	evidence: Evidence | null;
	advisory: 0 | 1 | null;
	updatedAt: string;
}

export interface SurveyList extends ListPage<SurveyListRow> {
	/** What the filters can be set to: those that have surveys. */
	clients: { id: string; name: string }[];
	engineers: { id: string; name: string }[];
	/** Surveys of the practice whatever the filters: tells an empty register from an empty answer. */
	totalUnfiltered: number;
}

export function parseSurveyListQuery(parameters: URLSearchParams): SurveyListQuery {
	const status = parameters.get('status');
	const verdict = parameters.get('verdict');
	return {
		...parseListQuery(parameters, SURVEY_SORTS, '-updated'),
		status: status === 'open' || status === 'closed' ? status : null,
		clientId: parameters.get('client') || null,
		engineerId: parameters.get('engineer') || null,
		verdict: verdict === 'none' ? 'none' : (VERDICTS.find((known) => known === verdict) ?? null)
	};
}

const ORDER: Record<SurveySort, string> = {
	number: 'v.number',
	title: 'v.title collate nocase',
	client: 'c.name collate nocase',
	updated: 'v.updated_at'
};

function joined(db: Db, scope: Scope) {
	const query = db('surveys as v')
		.join('clients as c', 'c.id', 'v.client_id')
		.join('sites as s', 's.id', 'v.site_id')
		.join('points as p', 'p.id', 'v.point_id')
		.join('users as u', 'u.id', 'v.engineer_id')
		.leftJoin('assessments as a', (on) => {
			on.on('a.survey_id', 'v.id').andOnVal('a.is_current', 1);
		})
		.where('v.practice_id', scope.practiceId);
	return scope.clientId === undefined ? query : query.andWhere('v.client_id', scope.clientId);
}

function filtered(db: Db, scope: Scope, query: SurveyListQuery) {
	const surveys = joined(db, scope);
	if (query.status !== null) void surveys.andWhere('v.status', query.status);
	if (query.clientId !== null) void surveys.andWhere('v.client_id', query.clientId);
	if (query.engineerId !== null) void surveys.andWhere('v.engineer_id', query.engineerId);
	if (query.verdict === 'none') void surveys.whereNull('a.id');
	else if (query.verdict !== null) void surveys.andWhere('a.verdict', query.verdict);
	if (query.q !== '') {
		const columns = ['v.number', 'v.title', 'c.name', 's.name', 'p.name'];
		void surveys.andWhereRaw(
			`(${columns.map((column) => `${column} like ? escape '\\'`).join(' or ')})`,
			columns.map(() => likePattern(query.q))
		);
	}
	return surveys;
}

/** Surveys of the practice with their current verdict. */
export async function listSurveys(db: Db, scope: Scope, query: SurveyListQuery): Promise<SurveyList> {
	const counted = await filtered(db, scope, query).count<{ n: number }[]>({ n: '*' }).first();
	const all = await joined(db, scope).count<{ n: number }[]>({ n: '*' }).first();
	const rows = await filtered(db, scope, query)
		.select<SurveyListRow[]>({
			id: 'v.id',
			number: 'v.number',
			title: 'v.title',
			status: 'v.status',
			clientId: 'c.id',
			clientName: 'c.name',
			siteName: 's.name',
			pointName: 'p.name',
			pointKind: 'p.kind',
			engineerName: 'u.name',
			verdict: 'a.verdict',
			evidence: 'a.evidence',
			advisory: 'a.advisory',
			updatedAt: 'v.updated_at'
		})
		.orderByRaw(`${ORDER[query.sort]} ${query.descending ? 'desc' : 'asc'}, v.number desc`)
		.limit(query.pageSize)
		.offset((query.page - 1) * query.pageSize);
	return {
		rows,
		total: counted?.n ?? 0,
		totalUnfiltered: all?.n ?? 0,
		page: query.page,
		pageSize: query.pageSize,
		clients: await joined(db, scope).distinct({ id: 'c.id', name: 'c.name' }).orderBy('c.name'),
		engineers: await joined(db, scope).distinct({ id: 'u.id', name: 'u.name' }).orderBy('u.name')
	};
}
