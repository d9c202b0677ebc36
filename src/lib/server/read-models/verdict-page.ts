import type { Assessment, VerdictRow } from '../../assessment/assessment';
import { isBlockedRow } from '../../assessment/blocked-row';
import { engineerSentence } from '../../assessment/verdict-sentence';
import type { RecordedCheck } from '../../checks/recorded-check';
import { applicableSets } from '../../limits/applicable-sets';
import type { LimitSet, LimitTable } from '../../limits/limit-set';
import { countryOfTimeZone } from '../../register/time-zones';
import { evidenceText, governingCounts } from '../../report/evidence-words';
import { limitRowWords, type LimitRowWords } from '../../report/limit-row-words';
import type { ReportSpectrum } from '../../report/report-model';
import { statisticText } from '../../report/rule-words';
import { tableSpectrum } from '../../report/table-spectrum';
import { isNotable, overLimit, worstByItem } from '../../report/verdict-table';
import type { MeasuringChain } from '../../uncertainty/measuring-chain';
import type { Db } from '../db/database';
import type { RevisionStatus } from '../../report/revision-status';
import { assessmentsRepository, type StoredAssessment } from '../repositories/assessments.repository';
import { limitSetsRepository } from '../repositories/limit-sets.repository';
import { toPointFacts } from '../repositories/point-mapping';
import type { Scope } from '../repositories/scope';

export interface VerdictQuery {
	table: string | null;
	showAll: boolean;
}

/** One row with all that explains it. */
export interface VerdictLine extends VerdictRow {
	statistic: string;
	multiplier: number;
	limitRow: LimitRowWords | null;
}

export interface VerdictTableView {
	key: string;
	lines: VerdictLine[];
	/** Rows of the table in all, and orders that the short form leaves out. */
	rowCount: number;
	leftOut: number;
	spectrum: ReportSpectrum | null;
}

export interface VerdictPage {
	assessment:
		| (Omit<Assessment, 'rows'> & {
				id: string;
				madeAt: string;
				engineVersion: string;
				sentence: string;
				evidenceText: string;
				flaggedCount: number;
				coverage: number | null;
				limitSetReason: string;
				overLimit: string[];
				totalLimits: { index: 'THD' | 'TDD'; quantity: 'voltage' | 'current'; limit_pct: number }[];
				/** Quantities of which at least one conductor has no verdict because a check blocks it. */
				blockedQuantities: ('voltage' | 'current')[];
				/** What the rows' uncertainty budgets are made from; null on assessments made before there were any. */
				measuringChain: MeasuringChain | null;
				/** What the checks of the captures said when it was made; null on assessments made before there were any. */
				checks: RecordedCheck[] | null;
		  })
		| null;
	/** Why there is no verdict yet. */
	whyNone: string | null;
	view: VerdictTableView | null;
	limitSets: { id: number; title: string; suitability: string; reason: string }[];
	limitSetId: number | null;
	limitSetReason: string;
	/** An assessment waits or is being made: its job. */
	working: string | null;
	report: { revisionId: string; status: RevisionStatus; assessmentId: string } | null;
}

function lineOf(row: VerdictRow, table: LimitTable | undefined): VerdictLine {
	const rule = table?.statistics.find((candidate) => candidate.key === row.statisticKey);
	return {
		...row,
		statistic: statisticText(table, row.statisticKey),
		multiplier: rule?.multiplier ?? 1,
		limitRow: limitRowWords(table, row)
	};
}

function tableView(assessment: Assessment, limitSet: LimitSet, query: VerdictQuery): VerdictTableView | null {
	const known = assessment.tables.map((table) => table.tableKey);
	const key = known.find((one) => one === query.table) ?? assessment.worst?.tableKey ?? known[0];
	if (key === undefined) return null;
	const table = limitSet.tables.find((candidate) => candidate.key === key);
	const rows = assessment.rows.filter((row) => row.tableKey === key);
	const worst = worstByItem(rows);
	const notable = worst.filter(isNotable);
	const shown = query.showAll ? rows : notable;
	return {
		key,
		lines: shown.map((row) => lineOf(row, table)),
		rowCount: rows.length,
		leftOut: worst.length - notable.length,
		spectrum: tableSpectrum(rows, table)
	};
}

/** Strictest limit of each total, as the headline figures stand beside it. */
function totalLimits(rows: readonly VerdictRow[]): NonNullable<VerdictPage['assessment']>['totalLimits'] {
	const found = new Map<
		string,
		{ index: 'THD' | 'TDD'; quantity: 'voltage' | 'current'; limit_pct: number }
	>();
	for (const row of rows) {
		if (row.item.kind !== 'total' || row.limit_pct === null) continue;
		const key = `${row.quantity}/${row.item.index}`;
		const known = found.get(key);
		if (known === undefined || row.limit_pct < known.limit_pct)
			found.set(key, { index: row.item.index, quantity: row.quantity, limit_pct: row.limit_pct });
	}
	return [...found.values()];
}

async function limitSetChoices(
	db: Db,
	scope: Scope,
	facts: ReturnType<typeof toPointFacts>,
	siteTimeZone: string
) {
	const sets = await limitSetsRepository(db, scope.practiceId).list();
	return applicableSets({ ...facts, country: countryOfTimeZone(siteTimeZone) }, sets).map(
		({ limitSet, suitability, reason }) => ({
			id: limitSet.id,
			title: `${limitSet.standard} (${limitSet.edition})`,
			suitability,
			reason
		})
	);
}

async function workingJob(db: Db, scope: Scope, surveyId: string): Promise<string | null> {
	const job = await db('jobs')
		.where({
			practice_id: scope.practiceId,
			kind: 'assess-survey',
			payload_json: JSON.stringify({ surveyId })
		})
		.whereIn('status', ['queued', 'running'])
		.first('id');
	return job?.id ?? null;
}

async function latestRevision(db: Db, scope: Scope, surveyId: string): Promise<VerdictPage['report']> {
	const row = await db('report_revisions as v')
		.join('reports as r', 'r.id', 'v.report_id')
		.where({ 'r.practice_id': scope.practiceId, 'r.survey_id': surveyId })
		.orderBy('v.created_at', 'desc')
		.first<{ id: string; status: RevisionStatus; assessment_id: string } | undefined>(
			'v.id',
			'v.status',
			'v.assessment_id'
		);
	return row ? { revisionId: row.id, status: row.status, assessmentId: row.assessment_id } : null;
}

async function whyNone(db: Db, scope: Scope, surveyId: string, choices: number): Promise<string> {
	if (choices === 0) return 'No limit set suits this point. Choose one in the point’s form.';
	const analysed = await db('analyses as a')
		.join('captures as c', 'c.id', 'a.capture_id')
		.where({ 'c.practice_id': scope.practiceId, 'c.survey_id': surveyId, 'a.is_current': 1 })
		.whereNull('c.removed_at')
		.first('a.id');
	return analysed
		? 'The readings have not been compared with the limits yet. Assess them now.'
		: 'There are no readings to compare with the limits. Upload a capture and confirm its channels first.';
}

function assessmentView(
	{ row, input, assessment: { rows, ...rest } }: StoredAssessment,
	phaseNames: Parameters<typeof engineerSentence>[1]['phaseNames']
): NonNullable<VerdictPage['assessment']> {
	const whole: Assessment = { ...rest, rows };
	const counts = governingCounts(whole);
	return {
		...rest,
		id: row.id,
		madeAt: row.created_at,
		engineVersion: row.engine_version,
		sentence: engineerSentence(whole, { phaseNames }),
		evidenceText: evidenceText(whole),
		flaggedCount: counts?.flaggedCount ?? 0,
		// A governing rule that was answered in full has no share to show, also when other rules lack data.
		coverage: whole.worst?.evidence === 'partial' ? (counts?.coverage ?? null) : null,
		limitSetReason: input.limitSet.reason,
		overLimit: overLimit(rows),
		totalLimits: totalLimits(rows),
		blockedQuantities: [...new Set(rows.filter(isBlockedRow).map(({ quantity }) => quantity))],
		measuringChain: input.measuringChain ?? null,
		checks: input.checks?.filter(({ outcome }) => outcome !== 'passes') ?? null
	};
}

/** Null when the survey is not of this practice. */
export async function loadVerdictPage(
	db: Db,
	scope: Scope,
	surveyId: string,
	query: VerdictQuery
): Promise<VerdictPage | null> {
	const survey = await db('surveys').where({ practice_id: scope.practiceId, id: surveyId }).first('point_id');
	const point =
		survey && (await db('points').where({ practice_id: scope.practiceId, id: survey.point_id }).first());
	if (!point) return null;
	const facts = toPointFacts(point);
	const stored = await assessmentsRepository(db, scope).currentOf(surveyId);
	const site = await db('sites')
		.where({ practice_id: scope.practiceId, id: point.site_id })
		.first('time_zone');
	const choices = await limitSetChoices(db, scope, facts, site?.time_zone ?? 'UTC');
	const limitSet = stored && (await limitSetsRepository(db, scope.practiceId).byId(stored.row.limit_set_id));
	return {
		assessment: stored && assessmentView(stored, facts.phaseNames),
		whyNone: stored ? null : await whyNone(db, scope, surveyId, choices.length),
		view: stored && limitSet ? tableView(stored.assessment, limitSet, query) : null,
		limitSets: choices,
		limitSetId: facts.limitSetId ?? stored?.row.limit_set_id ?? choices[0]?.id ?? null,
		limitSetReason: facts.limitSetReason,
		working: await workingJob(db, scope, surveyId),
		report: await latestRevision(db, scope, surveyId)
	};
}
