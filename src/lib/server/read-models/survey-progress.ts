import type { SurveyProgress } from '../../register/survey-stages';
import type { IntervalKind } from '../../harmonics/intervals';
import type { Db } from '../db/database';
import type { AssessmentRow } from '../db/rows';
import type { AssessmentInputRecord } from '../repositories/assessments.repository';
import type { Scope } from '../repositories/scope';

type Facts = Omit<SurveyProgress, 'surveyId' | 'point'>;

async function captures(
	db: Db,
	scope: Scope,
	surveyId: string
): Promise<Omit<Facts['captures'], 'blocking'> & { latest: string }> {
	const rows = await db('captures')
		.where({ practice_id: scope.practiceId, survey_id: surveyId })
		.groupByRaw('status, removed_at is null')
		.select<{ status: string; kept: 0 | 1; n: number; duration_s: number; latest: string }[]>(
			'status',
			db.raw(
				'removed_at is null as kept, count(*) as n, sum(duration_s) as duration_s, max(updated_at) as latest'
			)
		);
	const files = await db('capture_files as f')
		.join('captures as c', 'c.id', 'f.capture_id')
		.where({ 'c.practice_id': scope.practiceId, 'c.survey_id': surveyId })
		.whereNull('c.removed_at')
		.count<{ n: number }[]>({ n: '*' })
		.first();
	const kept = rows.filter((row) => row.kept === 1);
	const of = (...statuses: string[]) =>
		kept.filter((row) => statuses.includes(row.status)).reduce((sum, row) => sum + row.n, 0);
	return {
		count: kept.reduce((sum, row) => sum + row.n, 0),
		files: files?.n ?? 0,
		duration_s: kept.reduce((sum, row) => sum + row.duration_s, 0),
		recognised: of('recognised'),
		working: of('queued', 'analysing'),
		failed: of('failed'),
		// A removed capture changes what a verdict rests on, too.
		latest:
			rows
				.map((row) => row.latest)
				.sort()
				.at(-1) ?? ''
	};
}

/** Of several kinds of interval that one analysis holds, people count in the longest that limits are stated for. */
const LENGTH_RANK: Record<IntervalKind, number> = { '2h': 0, window: 1, '3s': 2, '10min': 3 };

async function readings(db: Db, scope: Scope, surveyId: string): Promise<Facts['readings']> {
	const rows = await db('analysis_series as s')
		.join('analyses as a', 'a.id', 's.analysis_id')
		.join('captures as c', 'c.id', 'a.capture_id')
		.where({ 'c.practice_id': scope.practiceId, 'c.survey_id': surveyId, 'a.is_current': 1 })
		.whereNull('c.removed_at')
		.whereNot('s.interval', 'whole')
		.groupBy('s.analysis_id', 's.interval')
		// Any one channel's flags will do: an interval is flagged for all channels of its recorder. Bytes are 0 or 1,
		// so what remains of the hexadecimal text without zero bytes counts the flagged ones.
		.select<{ analysis_id: string; interval: IntervalKind; intervals: number; flagged: number }[]>(
			's.analysis_id',
			's.interval',
			db.raw(
				"max(s.interval_count) as intervals, max(length(replace(hex(s.flagged), '00', '')) / 2) as flagged"
			)
		);
	const longest = new Map<string, (typeof rows)[number]>();
	for (const row of rows) {
		const known = longest.get(row.analysis_id);
		if (known === undefined || LENGTH_RANK[row.interval] > LENGTH_RANK[known.interval])
			longest.set(row.analysis_id, row);
	}
	const chosen = [...longest.values()];
	return {
		analyses: chosen.length,
		intervals: chosen.reduce((sum, row) => sum + row.intervals, 0),
		flagged: chosen.reduce((sum, row) => sum + row.flagged, 0)
	};
}

async function assessment(
	db: Db,
	scope: Scope,
	surveyId: string,
	changedAt: string
): Promise<Facts['assessment']> {
	const row: AssessmentRow | undefined = await db('assessments')
		.where({ practice_id: scope.practiceId, survey_id: surveyId, is_current: 1 })
		.first();
	if (!row) return null;
	const governing = await db('verdict_rows')
		.where({ practice_id: scope.practiceId, assessment_id: row.id, verdict: row.verdict })
		.groupBy('harmonic_order', 'index_name')
		.orderByRaw('max(utilisation) desc, harmonic_order')
		.select('harmonic_order', 'index_name');
	return {
		verdict: row.verdict,
		evidence: row.evidence,
		advisory: row.advisory === 1,
		governing: governing.flatMap((item) => item.harmonic_order ?? item.index_name ?? []),
		outdated: changedAt > row.created_at
	};
}

/** Read from what the current assessment kept: a rail on every page cannot check every capture anew. */
async function blockingChecks(db: Db, scope: Scope, surveyId: string): Promise<number> {
	const row = await db('assessments')
		.where({ practice_id: scope.practiceId, survey_id: surveyId, is_current: 1 })
		.first('input_json');
	const { checks = [] } = row
		? (JSON.parse(row.input_json) as Pick<AssessmentInputRecord, 'checks'>)
		: { checks: [] };
	return checks.filter(({ outcome, overrule }) => outcome === 'blocks' && overrule === null).length;
}

async function actions(db: Db, scope: Scope, surveyId: string): Promise<Facts['actions']> {
	const row = await db('actions')
		.where({ practice_id: scope.practiceId, survey_id: surveyId })
		.first<{ n: number; open: number | null }>(db.raw("count(*) as n, sum(status = 'open') as open"));
	return { count: row?.n ?? 0, open: row?.open ?? 0 };
}

async function report(db: Db, scope: Scope, surveyId: string): Promise<Facts['report']> {
	const row = await db('report_revisions as v')
		.join('reports as r', 'r.id', 'v.report_id')
		.where({ 'r.practice_id': scope.practiceId, 'r.survey_id': surveyId })
		.orderBy([
			{ column: 'v.created_at', order: 'desc' },
			{ column: 'v.revision', order: 'desc' }
		])
		.first<{ status: NonNullable<Facts['report']>['status']; revision: string } | undefined>(
			'v.status',
			'v.revision'
		);
	return row ? { status: row.status, revision: row.revision } : null;
}

/**
 * How far a survey has come, counted from its tables.
 * pointUpdatedAt  instant of the point's last change: a verdict made before it is out of date
 */
export async function loadSurveyProgress(
	db: Db,
	scope: Scope,
	surveyId: string,
	pointUpdatedAt: string
): Promise<Facts> {
	const { latest, ...captureFacts } = await captures(db, scope, surveyId);
	const changedAt = latest > pointUpdatedAt ? latest : pointUpdatedAt;
	return {
		captures: { ...captureFacts, blocking: await blockingChecks(db, scope, surveyId) },
		readings: await readings(db, scope, surveyId),
		assessment: await assessment(db, scope, surveyId, changedAt),
		actions: await actions(db, scope, surveyId),
		report: await report(db, scope, surveyId)
	};
}
