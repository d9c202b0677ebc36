import { buildReportModel } from '../../../report/build-report-model';
import { measuredDataText, canonicalJson } from '../../../report/measured-data';
import type {
	ReportCapture,
	ReportDocument,
	ReportInstrument,
	ReportModel
} from '../../../report/report-model';
import type { RecordedCheck } from '../../../checks/recorded-check';
import { parseSummary, type AnalysisParameters, type WaveformSummary } from '../../analysis/analysis-summary';
import { parseSettings } from '../../analysis/capture-settings';
import { decodeSeries } from '../../analysis/series-codec';
import { createHash } from 'node:crypto';
import type { Db } from '../../db/database';
import type {
	AnalysisRow,
	CaptureRow,
	PracticeRow,
	ReportRevisionRow,
	ReportRow,
	SurveyRow
} from '../../db/rows';
import { actionsRepository } from '../../repositories/actions.repository';
import { analysesRepository } from '../../repositories/analyses.repository';
import { assessmentsRepository, type AssessmentInputRecord } from '../../repositories/assessments.repository';
import { calibrationsRepository } from '../../repositories/calibrations.repository';
import { capturesRepository } from '../../repositories/captures.repository';
import { instrumentsRepository } from '../../repositories/instruments.repository';
import { limitSetsRepository } from '../../repositories/limit-sets.repository';
import { toPointFacts } from '../../repositories/point-mapping';
import { reportsRepository } from '../../repositories/reports.repository';
import type { Scope } from '../../repositories/scope';
import type { BlobStore } from '../../storage/blob-store';
import { equipmentOf } from './report-equipment';
import { qualityOf, trendsOf, waveformOf, type AnalysedCapture } from './report-evidence';

/** How the revision stands in the document made now: as it is, or as it will be once issued. */
export interface Standing {
	status: ReportRevisionRow['status'];
	number: string | null;
	checkedBy: string | null;
	checkedById: string | null;
	issuedAt: string | null;
}

export function sha256(text: string): string {
	return createHash('sha256').update(text).digest('hex');
}

async function namesOf(
	db: Db,
	ids: readonly (string | null)[]
): Promise<(id: string | null) => string | null> {
	const rows = await db('users')
		.whereIn('id', [...new Set(ids.filter((id) => id !== null))])
		.select('id', 'name');
	const names = new Map(rows.map((row) => [row.id, row.name]));
	return (id) => (id === null ? null : (names.get(id) ?? null));
}

async function documentOf(
	db: Db,
	scope: Scope,
	report: ReportRow,
	revision: ReportRevisionRow,
	standing: Standing
): Promise<ReportDocument> {
	const all = await reportsRepository(db, scope).revisionsOf(report.id);
	const name = await namesOf(db, [...all.flatMap((one) => [one.prepared_by, one.checked_by])]);
	return {
		title: report.title,
		number: standing.number,
		revision: revision.revision,
		status: standing.status,
		reason: revision.reason,
		preparedBy: name(revision.prepared_by) ?? '',
		preparedAt: revision.sent_for_check_at ?? revision.updated_at,
		checkedBy: standing.checkedBy,
		issuedAt: standing.issuedAt,
		selfChecked: standing.checkedById !== null && standing.checkedById === revision.prepared_by,
		revisions: all.map((one) => {
			const own = one.id === revision.id;
			// An earlier revision that stands is superseded by the one that is issued here.
			const status =
				!own && standing.issuedAt !== null && one.status === 'issued' ? 'superseded' : one.status;
			return {
				revision: one.revision,
				status: own ? standing.status : status,
				reason: one.reason,
				preparedBy: name(one.prepared_by) ?? '',
				checkedBy: own ? standing.checkedBy : one.issued_at === null ? null : name(one.checked_by),
				issuedAt: own ? standing.issuedAt : one.issued_at
			};
		}),
		createdAt: standing.issuedAt ?? revision.updated_at
	};
}

async function capturesOfAnalyses(db: Db, scope: Scope, input: AssessmentInputRecord) {
	const analyses: AnalysisRow[] = await db('analyses')
		.where({ practice_id: scope.practiceId })
		.whereIn('id', input.analysisIds);
	const rows: CaptureRow[] = await db('captures')
		.where({ practice_id: scope.practiceId })
		.whereIn(
			'id',
			analyses.map((analysis) => analysis.capture_id)
		);
	const files = await capturesRepository(db, scope).filesOf(rows.map((row) => row.id));
	const ordered = input.analysisIds.flatMap((id) => analyses.find((analysis) => analysis.id === id) ?? []);
	return ordered.flatMap((analysis) => {
		const capture = rows.find((row) => row.id === analysis.capture_id);
		return capture === undefined
			? []
			: [{ analysis, capture, files: files.filter((file) => file.capture_id === capture.id) }];
	});
}

type CaptureOfAnalysis = Awaited<ReturnType<typeof capturesOfAnalyses>>[number];

function waveformChannels(summary: WaveformSummary): ReportCapture['channels'] {
	return summary.channels.map(({ name, quantity, phase, toPrimary }) => ({
		channel: name,
		quantity,
		phase,
		toPrimary
	}));
}

/** Columns of a log by quantity and phase: it has many of each, one for every order. */
function trendChannels(capture: CaptureRow): ReportCapture['channels'] {
	const settings = capture.mappings_json === null ? null : parseSettings(capture.mappings_json);
	if (settings?.kind !== 'trend') return [];
	const found = new Map<string, { count: number; channel: ReportCapture['channels'][number] }>();
	for (const { quantity, phase, toPrimary } of settings.columns) {
		const key = `${quantity}/${phase}/${toPrimary}`;
		const count = (found.get(key)?.count ?? 0) + 1;
		const channel = count === 1 ? '1 column' : `${count} columns`;
		found.set(key, { count, channel: { channel, quantity, phase, toPrimary } });
	}
	return [...found.values()].map(({ channel }) => channel);
}

function reportCapture({ analysis, capture, files }: CaptureOfAnalysis): ReportCapture {
	const summary = parseSummary(analysis.summary_json);
	return {
		name: capture.name,
		format: capture.format,
		variant: capture.variant,
		startedAt: capture.started_at,
		duration_s: capture.duration_s,
		samplingRate_Hz:
			summary.kind === 'waveform' ? (summary.samples.segments[0]?.samplingRate_Hz ?? null) : null,
		windowCount: summary.kind === 'waveform' ? summary.windowCount : summary.intervalCount,
		files: files.map((file) => ({
			name: file.name,
			sha256: file.sha256,
			size_bytes: Number(file.size_bytes)
		})),
		channels: summary.kind === 'waveform' ? waveformChannels(summary) : trendChannels(capture)
	};
}

/** Remarks of analyses whose assessment was made before checks were kept with it. */
function checksBefore(behind: readonly CaptureOfAnalysis[]): RecordedCheck[] {
	return behind.flatMap(({ analysis, capture }) =>
		parseSummary(analysis.summary_json).quality.map(({ severity, sentence }) => ({
			capture: capture.name,
			title: 'Remark of the analysis',
			outcome: severity,
			sentence,
			overrule: null
		}))
	);
}

async function analysedCapture(db: Db, scope: Scope, one: CaptureOfAnalysis): Promise<AnalysedCapture> {
	const summary = parseSummary(one.analysis.summary_json);
	const parameters = JSON.parse(one.analysis.parameters_json) as AnalysisParameters;
	return {
		captureName: one.capture.name,
		start_ms: parameters.start_ms,
		summary: summary.kind === 'waveform' ? summary : null,
		series: (await analysesRepository(db, scope).seriesOf(one.analysis.id)).map(decodeSeries)
	};
}

async function instrumentOf(
	db: Db,
	scope: Scope,
	instrumentId: string | null,
	period: { from: string | null; to: string | null }
): Promise<ReportInstrument | null> {
	if (instrumentId === null) return null;
	const instruments = instrumentsRepository(db, scope);
	const row = await instruments.byId(instrumentId);
	if (row === undefined) return null;
	const calibrations = await calibrationsRepository(db, scope).ofInstruments([instrumentId]);
	const { from, to } = period;
	const covers =
		from === null || to === null || calibrations.length === 0
			? null
			: calibrations.some((c) => c.calibrated_on <= from.slice(0, 10) && c.due_on >= to.slice(0, 10));
	return {
		name: row.name,
		model: row.model,
		serialNumber: row.serial_number,
		harmonicClass: row.harmonic_class,
		sensors: row.sensors,
		calibrations: calibrations.map((c) => ({
			certificate: c.certificate_number,
			laboratory: c.laboratory,
			calibratedOn: c.calibrated_on,
			dueOn: c.due_on
		})),
		calibratedDuringSurvey: covers
	};
}

function periodOf(captures: readonly ReportCapture[]): { from: string | null; to: string | null } {
	const known = captures.flatMap(({ startedAt, duration_s }) =>
		startedAt === null ? [] : [{ from: Date.parse(startedAt), to: Date.parse(startedAt) + duration_s * 1000 }]
	);
	if (known.length === 0) return { from: null, to: null };
	return {
		from: new Date(Math.min(...known.map((one) => one.from))).toISOString(),
		to: new Date(Math.max(...known.map((one) => one.to))).toISOString()
	};
}

function practiceOf(row: PracticeRow): ReportModel['practice'] {
	return {
		name: row.name,
		shortName: row.short_name,
		address: row.address,
		email: row.email,
		phone: row.phone,
		paper: row.paper,
		timeZone: row.time_zone,
		relianceStatement: row.reliance_statement
	};
}

interface Subject {
	report: ReportRow;
	revision: ReportRevisionRow;
	survey: SurveyRow;
}

async function subjectRows(db: Db, scope: Scope, survey: SurveyRow) {
	const [practice, client, site, point, engineer] = [
		await db('practices').where({ id: scope.practiceId }).first(),
		await db('clients').where({ practice_id: scope.practiceId, id: survey.client_id }).first(),
		await db('sites').where({ practice_id: scope.practiceId, id: survey.site_id }).first(),
		await db('points').where({ practice_id: scope.practiceId, id: survey.point_id }).first(),
		await db('users').where({ id: survey.engineer_id }).first('name')
	];
	if (!practice || !client || !site || !point || !engineer)
		throw new Error('a survey stands on rows that are missing');
	return { practice, client, site, point, engineer };
}

function withHash(model: ReportModel): ReportModel {
	return { ...model, lineage: { ...model.lineage, dataSha256: sha256(measuredDataText(model)) } };
}

/** Hash of the whole model: equal hashes mean equal documents. */
export function modelSha256(model: ReportModel): string {
	return sha256(canonicalJson(model));
}

/**
 * Reads everything a report is made from and builds its model. The point's facts are those of now; the figures are
 * those of the assessment that the revision rests on.
 */
export async function gatherReport(
	db: Db,
	blobs: BlobStore,
	scope: Scope,
	{ report, revision, survey }: Subject,
	standing: Standing
): Promise<ReportModel> {
	const stored = await assessmentsRepository(db, scope).byId(revision.assessment_id);
	const limitSet = stored && (await limitSetsRepository(db, scope.practiceId).byId(stored.row.limit_set_id));
	if (!stored || !limitSet) throw new Error('a revision rests on an assessment that is missing');
	const { assessment, input } = stored;
	const { practice, client, site, point, engineer } = await subjectRows(db, scope, survey);
	const facts = toPointFacts(point);
	const behind = await capturesOfAnalyses(db, scope, input);
	const captures = behind.map(reportCapture);
	const analysed: AnalysedCapture[] = [];
	for (const one of behind) analysed.push(await analysedCapture(db, scope, one));
	const period = periodOf(captures);
	const table = limitSet.tables.find((candidate) => candidate.key === assessment.worst?.tableKey);
	const actions = await actionsRepository(db, scope).ofSurvey(survey.id);
	return withHash(
		buildReportModel({
			document: await documentOf(db, scope, report, revision, standing),
			practice: practiceOf(practice),
			client: { name: client.name },
			site: { name: site.name, address: site.address, utility: site.utility, timeZone: site.time_zone },
			survey: {
				number: survey.number,
				title: survey.title,
				engineer: engineer.name,
				measuredFrom: period.from,
				measuredTo: period.to
			},
			summary: revision.summary,
			findings: JSON.parse(revision.findings_json) as string[],
			actions: actions.map((action) => ({
				title: action.title,
				detail: action.detail,
				priority: action.priority,
				side: action.side,
				responsible: action.responsible,
				dueOn: action.due_on
			})),
			instrument: await instrumentOf(db, scope, input.instrumentId, period),
			equipment: await equipmentOf(
				db,
				scope,
				survey.id,
				behind.map((one) => one.capture),
				site.time_zone
			),
			waveform: await waveformOf(blobs, analysed, assessment, input, table, facts.phaseNames),
			trends: trendsOf(analysed, assessment, input, table),
			quality: qualityOf(analysed, input.checks ?? checksBefore(behind)),
			pointFacts: facts,
			assessment,
			assessmentId: stored.row.id,
			engineVersion: stored.row.engine_version,
			limitSet,
			limitSetSourceSha256: input.limitSet.sourceSha256,
			limitSetReason: input.limitSet.reason,
			uncertaintyAtOrders: input.uncertaintyAtOrders,
			captures
		})
	);
}
