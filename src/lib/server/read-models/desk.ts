import type { Verdict } from '../../assessment/assessment';
import { formatShortCalendarDate } from '../../report/dates';
import type { Db } from '../db/database';
import { calibrationsDue, type CalibrationDueList } from './calibration-due';

export interface DeskItem {
	kind: 'check' | 'returned' | 'query' | 'action' | 'unacknowledged' | 'confirm' | 'assess';
	title: string;
	detail: string;
	href: string;
	/** ISO instant or date that the item is sorted by. */
	since: string;
}

export interface DeskSurvey {
	id: string;
	number: string;
	title: string;
	clientName: string;
	siteName: string;
	verdict: Verdict | null;
	updatedAt: string;
}

interface RevisionLine {
	id: string;
	status: string;
	survey_id: string;
	title: string;
	client: string;
	site: string;
	number: string | null;
	revision: string;
	prepared_by: string;
	updated_at: string;
	issued_at: string | null;
	check_note: string;
}

function revisions(db: Db, practiceId: string) {
	return db('report_revisions as v')
		.join('reports as r', 'r.id', 'v.report_id')
		.join('clients as c', 'c.id', 'v.client_id')
		.join('sites as t', 't.id', 'r.site_id')
		.where('v.practice_id', practiceId)
		.select<RevisionLine[]>({
			id: 'v.id',
			status: 'v.status',
			survey_id: 'r.survey_id',
			title: 'r.title',
			client: 'c.name',
			site: 't.name',
			number: 'r.number',
			revision: 'v.revision',
			prepared_by: 'v.prepared_by',
			updated_at: 'v.updated_at',
			issued_at: 'v.issued_at',
			check_note: 'v.check_note'
		});
}

const reportHref = (surveyId: string): string => `/surveys/${surveyId}/report`;

async function reportItems(
	db: Db,
	practiceId: string,
	person: { userId: string; mayCheck: boolean }
): Promise<DeskItem[]> {
	const items: DeskItem[] = [];
	if (person.mayCheck)
		for (const v of await revisions(db, practiceId)
			.where('v.status', 'in-check')
			.whereNot('v.prepared_by', person.userId))
			items.push({
				kind: 'check',
				title: `Check: ${v.title}`,
				detail: `${v.client}, ${v.site}, revision ${v.revision}`,
				href: reportHref(v.survey_id),
				since: v.updated_at
			});
	for (const v of await revisions(db, practiceId).where({
		'v.status': 'returned',
		'v.prepared_by': person.userId
	}))
		items.push({
			kind: 'returned',
			title: `Returned to you: ${v.title}`,
			detail: v.check_note || `${v.client}, ${v.site}`,
			href: reportHref(v.survey_id),
			since: v.updated_at
		});
	return items;
}

async function unacknowledgedItems(db: Db, practiceId: string, olderThan: string): Promise<DeskItem[]> {
	const rows = await revisions(db, practiceId)
		.where('v.status', 'issued')
		.andWhere('v.issued_at', '<', olderThan)
		.whereNotExists(db('acknowledgements as k').whereRaw('k.revision_id = v.id'));
	return rows.map((v) => ({
		kind: 'unacknowledged',
		title: `Not acknowledged yet: ${v.number ?? v.title} rev ${v.revision}`,
		detail: `${v.client}, ${v.site}`,
		href: reportHref(v.survey_id),
		since: v.issued_at ?? v.updated_at
	}));
}

async function queryItems(db: Db, practiceId: string): Promise<DeskItem[]> {
	const rows = await db('queries as q')
		.join('report_revisions as v', 'v.id', 'q.revision_id')
		.join('reports as r', 'r.id', 'v.report_id')
		.join('clients as c', 'c.id', 'q.client_id')
		.join('users as u', 'u.id', 'q.asked_by')
		.where({ 'q.practice_id': practiceId, 'q.status': 'open' })
		.select<{ id: string; number: string; client: string; asker: string; updated_at: string }[]>({
			id: 'q.id',
			number: 'r.number',
			client: 'c.name',
			asker: 'u.name',
			updated_at: 'q.updated_at'
		});
	return rows.map((q) => ({
		kind: 'query',
		title: `Question on ${q.number}`,
		detail: `${q.asker}, ${q.client}`,
		href: `/queries/${q.id}`,
		since: q.updated_at
	}));
}

async function actionItems(db: Db, practiceId: string, today: string): Promise<DeskItem[]> {
	const rows = await db('actions as a')
		.join('clients as c', 'c.id', 'a.client_id')
		.where('a.practice_id', practiceId)
		.whereNotNull('a.published_at')
		.andWhere((either) =>
			either
				.where({ 'a.status': 'done' })
				.orWhere((mine) => mine.where({ 'a.status': 'open', 'a.side': 'practice' }))
				.orWhere((late) =>
					late.where({ 'a.status': 'open', 'a.side': 'client' }).andWhere('a.due_on', '<', today)
				)
		)
		.select<
			{
				title: string;
				client: string;
				status: string;
				side: string;
				due_on: string | null;
				done_at: string | null;
				survey_id: string;
				created_at: string;
			}[]
		>({
			title: 'a.title',
			client: 'c.name',
			status: 'a.status',
			side: 'a.side',
			due_on: 'a.due_on',
			done_at: 'a.done_at',
			survey_id: 'a.survey_id',
			created_at: 'a.created_at'
		});
	return rows.map((a) => ({
		kind: a.status === 'done' ? 'confirm' : 'action',
		title: a.status === 'done' ? `Confirm as done: ${a.title}` : a.title,
		detail:
			a.client +
			(a.status === 'open' && a.due_on
				? `, due ${formatShortCalendarDate(a.due_on)}${a.due_on < today ? ' (late)' : ''}`
				: ''),
		href: `/surveys/${a.survey_id}/remedies`,
		since: a.done_at ?? a.due_on ?? a.created_at
	}));
}

const DAY_MS = 86_400_000;

/** What needs this person today, the oldest first, and the surveys worked on last. */
export async function desk(
	db: Db,
	practiceId: string,
	person: { userId: string; mayCheck: boolean },
	now: Date
): Promise<{ items: DeskItem[]; surveys: DeskSurvey[]; calibrations: CalibrationDueList }> {
	const today = now.toISOString().slice(0, 10);
	const items = [
		...(await reportItems(db, practiceId, person)),
		...(await queryItems(db, practiceId)),
		...(await actionItems(db, practiceId, today)),
		...(await unacknowledgedItems(db, practiceId, new Date(now.getTime() - 7 * DAY_MS).toISOString()))
	].sort((a, b) => a.since.localeCompare(b.since));
	const surveys = await db('surveys as s')
		.join('clients as c', 'c.id', 's.client_id')
		.join('sites as t', 't.id', 's.site_id')
		.leftJoin('assessments as a', (on) => on.on('a.survey_id', 's.id').andOnVal('a.is_current', 1))
		.where({ 's.practice_id': practiceId, 's.status': 'open' })
		.orderBy('s.updated_at', 'desc')
		.limit(8)
		.select<DeskSurvey[]>({
			id: 's.id',
			number: 's.number',
			title: 's.title',
			clientName: 'c.name',
			siteName: 't.name',
			verdict: 'a.verdict',
			updatedAt: 's.updated_at'
		});
	return { items, surveys, calibrations: await calibrationsDue(db, practiceId, today) };
}
