import type { CaptureFacts } from '../../recording/capture-facts';
import type { MappingSuggestion } from '../../recording/channel-suggestion';
import type { PointFacts } from '../../register/point-facts';
import { parseSummary, type AnalysisSummary } from '../analysis/analysis-summary';
import { parseSettings, type CaptureSettings } from '../analysis/capture-settings';
import type { Db } from '../db/database';
import type { CaptureRow, PointRow } from '../db/rows';
import { analyseCapture } from '../jobs/analyse-capture.job';
import type { JobState } from '../jobs/job-queue';
import { readTable } from '../jobs/read-table.job';
import { recogniseCapture } from '../jobs/recognise-capture.job';
import { unpackArchiveJob } from '../jobs/unpack-archive.job';
import { toPointFacts } from '../repositories/point-mapping';
import type { Scope } from '../repositories/scope';
import { likePattern, type ListPage, type ListQuery } from './list-query';

/** What was recognised at intake, kept with the capture: facts_json. */
export interface StoredFacts extends CaptureFacts {
	/** One per channel or column, in their order. */
	suggestions: MappingSuggestion[];
}

/** The survey that captures belong to, with what mapping, analysis and readings need of its point and site. */
export interface CaptureSurvey {
	id: string;
	clientId: string;
	number: string;
	timeZone: string;
	/** Named by the survey for all its captures; null = not decided. */
	instrumentId: string | null;
	facts: PointFacts;
}

type Joined = PointRow & {
	survey_id: string;
	survey_number: string;
	survey_instrument: string | null;
	time_zone: string;
};

export async function captureSurvey(db: Db, scope: Scope, surveyId: string): Promise<CaptureSurvey | null> {
	const query = db('surveys')
		.join('points', 'points.id', 'surveys.point_id')
		.join('sites', 'sites.id', 'surveys.site_id')
		.where('surveys.id', surveyId)
		.where('surveys.practice_id', scope.practiceId);
	if (scope.clientId !== undefined) void query.where('surveys.client_id', scope.clientId);
	const row = await query
		.select<Joined[]>('points.*', {
			survey_id: 'surveys.id',
			survey_number: 'surveys.number',
			survey_instrument: 'surveys.instrument_id',
			time_zone: 'sites.time_zone'
		})
		.first();
	if (!row) return null;
	return {
		id: row.survey_id,
		clientId: row.client_id,
		number: row.survey_number,
		timeZone: row.time_zone,
		instrumentId: row.survey_instrument,
		facts: toPointFacts(row)
	};
}

export interface CaptureListRow {
	id: string;
	name: string;
	kind: CaptureRow['kind'];
	format: string;
	variant: string;
	status: CaptureRow['status'];
	problem: string | null;
	startedAt: string | null;
	duration_s: number;
	createdAt: string;
	uploadedBy: string;
	channelCount: number;
	samplingRate_Hz: CaptureFacts['samplingRate_Hz'];
	interval_s: number | null;
	nominalFrequency_Hz: number | null;
	valuesAre: CaptureFacts['valuesAre'];
	warningCount: number;
	fileCount: number;
	size_bytes: number;
}

export const CAPTURE_SORTS = ['created', 'name', 'started', 'duration'] as const;
export type CaptureSort = (typeof CAPTURE_SORTS)[number];
const SORT_COLUMN: Record<CaptureSort, string> = {
	created: 'captures.created_at',
	name: 'captures.name',
	started: 'captures.started_at',
	duration: 'captures.duration_s'
};

export async function captureList(
	db: Db,
	scope: Scope,
	surveyId: string,
	query: ListQuery<CaptureSort>
): Promise<ListPage<CaptureListRow>> {
	const matching = () => {
		const own = db('captures')
			.where('captures.practice_id', scope.practiceId)
			.where('captures.survey_id', surveyId)
			.whereNull('captures.removed_at');
		if (scope.clientId !== undefined) void own.where('captures.client_id', scope.clientId);
		if (query.q) void own.whereRaw(`captures.name like ? escape '\\'`, [likePattern(query.q)]);
		return own;
	};
	const total = (await matching().count<{ n: number }[]>({ n: '*' }).first())?.n ?? 0;
	const rows = await matching()
		.join('users', 'users.id', 'captures.uploaded_by')
		.orderBy(SORT_COLUMN[query.sort], query.descending ? 'desc' : 'asc')
		.orderBy('captures.id')
		.limit(query.pageSize)
		.offset((query.page - 1) * query.pageSize)
		.select('captures.*', { uploader: 'users.name' });
	const sizes = await db('capture_files')
		.where({ practice_id: scope.practiceId })
		.whereIn(
			'capture_id',
			rows.map((row) => row.id)
		)
		.groupBy('capture_id')
		.select<{ capture_id: string; files: number; bytes: number }[]>(
			db.raw('capture_id, count(*) as files, sum(size_bytes) as bytes')
		);
	return {
		rows: rows.map((row) =>
			listRow(
				row,
				sizes.find((size) => size.capture_id === row.id)
			)
		),
		total,
		page: query.page,
		pageSize: query.pageSize
	};
}

function listRow(
	row: CaptureRow & { uploader: string },
	size: { files: number; bytes: number } | undefined
): CaptureListRow {
	const facts = JSON.parse(row.facts_json) as StoredFacts;
	return {
		id: row.id,
		name: row.name,
		kind: row.kind,
		format: row.format,
		variant: row.variant,
		status: row.status,
		problem: row.problem,
		startedAt: row.started_at,
		duration_s: row.duration_s,
		createdAt: row.created_at,
		uploadedBy: row.uploader,
		channelCount: facts.channelCount,
		samplingRate_Hz: facts.samplingRate_Hz,
		interval_s: facts.interval_s,
		nominalFrequency_Hz: facts.nominalFrequency_Hz,
		valuesAre: facts.valuesAre,
		warningCount: facts.remarks.filter((remark) => remark.severity === 'warning').length,
		fileCount: size?.files ?? 0,
		size_bytes: size?.bytes ?? 0
	};
}

export interface CaptureDetail {
	id: string;
	name: string;
	kind: CaptureRow['kind'];
	status: CaptureRow['status'];
	problem: string | null;
	startedAt: string | null;
	createdAt: string;
	uploadedBy: string;
	facts: StoredFacts;
	/** A person, or a template, told how the table is to be read. */
	isTold: boolean;
	settings: CaptureSettings | null;
	files: { id: string; name: string; sha256: string; size_bytes: number }[];
	analysis: { id: string; createdAt: string; engineVersion: string; summary: AnalysisSummary } | null;
}

export async function captureDetail(
	db: Db,
	scope: Scope,
	surveyId: string,
	captureId: string
): Promise<CaptureDetail | null> {
	const query = db('captures')
		.join('users', 'users.id', 'captures.uploaded_by')
		.where('captures.id', captureId)
		.where('captures.survey_id', surveyId)
		.where('captures.practice_id', scope.practiceId)
		.whereNull('captures.removed_at');
	if (scope.clientId !== undefined) void query.where('captures.client_id', scope.clientId);
	const row = await query.first('captures.*', { uploader: 'users.name' });
	if (!row) return null;
	const own = { practice_id: scope.practiceId, capture_id: captureId };
	const files = await db('capture_files').where(own).orderBy('position');
	const analysis = await db('analyses')
		.where({ ...own, is_current: 1 })
		.first();
	return {
		id: row.id,
		name: row.name,
		kind: row.kind,
		status: row.status,
		problem: row.problem,
		startedAt: row.started_at,
		createdAt: row.created_at,
		uploadedBy: row.uploader,
		facts: JSON.parse(row.facts_json) as StoredFacts,
		isTold: row.layout_json !== null,
		settings: row.mappings_json === null ? null : parseSettings(row.mappings_json),
		files: files.map(({ id, name, sha256, size_bytes }) => ({ id, name, sha256, size_bytes })),
		analysis: analysis
			? {
					id: analysis.id,
					createdAt: analysis.created_at,
					engineVersion: analysis.engine_version,
					summary: parseSummary(analysis.summary_json)
				}
			: null
	};
}

const NEWS_MS = 15 * 60_000;

export interface SurveyJob extends JobState {
	/** What the work is about: the capture's or the files' name. */
	name: string;
	captureId: string | null;
}

/** Work in hand for a survey's captures, and what failed or was done in part a moment ago: a reload finds both again. */
export async function surveyJobs(db: Db, scope: Scope, surveyId: string, now: Date): Promise<SurveyJob[]> {
	const rows = await db('jobs')
		.where('jobs.practice_id', scope.practiceId)
		.whereIn('jobs.kind', [unpackArchiveJob.kind, recogniseCapture.kind, readTable.kind, analyseCapture.kind])
		.whereRaw(`json_extract(jobs.payload_json, '$.surveyId') = ?`, [surveyId])
		.andWhere((recent) =>
			recent.whereIn('jobs.status', ['queued', 'running']).orWhere((ended) =>
				ended
					.whereIn('jobs.status', ['failed', 'done'])
					.whereNotNull('jobs.problem')
					.where('jobs.finished_at', '>', new Date(now.getTime() - NEWS_MS).toISOString())
			)
		)
		.leftJoin('captures', 'captures.id', db.raw(`json_extract(jobs.payload_json, '$.captureId')`))
		.orderBy('jobs.created_at')
		.select('jobs.*', { capture_name: 'captures.name' });
	return rows.map((row) => {
		const payload = JSON.parse(row.payload_json) as { name?: string; captureId?: string };
		return {
			id: row.id,
			kind: row.kind,
			status: row.status,
			done: row.progress_done,
			total: row.progress_total,
			text: row.progress_text,
			problem: row.problem,
			name: row.capture_name ?? payload.name ?? '',
			captureId: payload.captureId ?? null
		};
	});
}
