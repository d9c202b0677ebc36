import type { Readable } from 'node:stream';
import type { Actor } from '../../access/access';
import { AppError, requireFound } from '../app-error';
import type { CaptureSettings } from '../analysis/capture-settings';
import { appendAudit } from '../audit/audit-log';
import { requirePermission } from '../auth/require-permission';
import { withTransaction, type Db } from '../db/database';
import type { CaptureRow } from '../db/rows';
import { analyseCapture } from '../jobs/analyse-capture.job';
import { assessSurvey } from '../jobs/assess-survey.job';
import type { JobState } from '../jobs/job-queue';
import { recogniseCapture } from '../jobs/recognise-capture.job';
import { unpackArchiveJob } from '../jobs/unpack-archive.job';
import {
	captureDetail,
	captureList,
	captureSurvey,
	surveyJobs,
	type CaptureDetail,
	type CaptureListRow,
	type CaptureSort,
	type CaptureSurvey,
	type SurveyJob
} from '../read-models/capture-list';
import type { ListPage, ListQuery } from '../read-models/list-query';
import { analysesRepository } from '../repositories/analyses.repository';
import { capturesRepository } from '../repositories/captures.repository';
import { scopeOf } from '../repositories/scope';
import { uploadsRepository } from '../repositories/uploads.repository';
import type { ServiceDeps } from '../service-deps';

export interface OriginalFile {
	name: string;
	size_bytes: number;
	sha256: string;
	content: Readable;
}

/**
 * A capture whose work was given up by the queue still says that it is being analysed: nobody was left to correct it.
 * Without unfinished work it has failed.
 */
function withoutFalseHope<C extends Pick<CaptureRow, 'id' | 'status' | 'problem'>>(
	capture: C,
	work: readonly SurveyJob[]
): C {
	const waits = capture.status === 'queued' || capture.status === 'analysing';
	const isWorkedOn = work.some((job) => job.captureId === capture.id && job.status !== 'failed');
	if (!waits || isWorkedOn) return capture;
	return {
		...capture,
		status: 'failed',
		problem: 'The analysis stopped before its end. Confirm and analyse again.'
	};
}

/** Captures of a survey: what was recognised, how the channels are mapped, their analysis and their originals. */
export function createCapturesService(deps: ServiceDeps) {
	const { db, blobs, jobs, clock } = deps;

	async function list(
		actor: Actor,
		surveyId: string,
		query: ListQuery<CaptureSort>
	): Promise<{ survey: CaptureSurvey; captures: ListPage<CaptureListRow>; jobs: SurveyJob[] }> {
		requirePermission(actor, 'capture.read');
		const scope = scopeOf(actor);
		const survey = requireFound(await captureSurvey(db, scope, surveyId), 'survey');
		const work = await surveyJobs(db, scope, survey.id, clock());
		const captures = await captureList(db, scope, survey.id, query);
		return {
			survey,
			captures: { ...captures, rows: captures.rows.map((row) => withoutFalseHope(row, work)) },
			jobs: work
		};
	}

	async function detail(
		actor: Actor,
		surveyId: string,
		captureId: string
	): Promise<{ survey: CaptureSurvey; capture: CaptureDetail; jobs: SurveyJob[] }> {
		requirePermission(actor, 'capture.read');
		const scope = scopeOf(actor);
		const survey = requireFound(await captureSurvey(db, scope, surveyId), 'survey');
		const capture = requireFound(await captureDetail(db, scope, survey.id, captureId), 'capture');
		const work = await surveyJobs(db, scope, survey.id, clock());
		return {
			survey,
			capture: withoutFalseHope(capture, work),
			jobs: work.filter((job) => job.captureId === capture.id)
		};
	}

	/** Keeps what the engineer confirmed and queues the analysis that rests on it. */
	async function confirm(
		actor: Actor,
		surveyId: string,
		captureId: string,
		confirmed: { settings: CaptureSettings; startedAt: Date }
	): Promise<string> {
		requirePermission(actor, 'capture.write');
		const scope = scopeOf(actor);
		return withTransaction(db, async (trx) => {
			const captures = capturesRepository(trx, scope);
			const capture = await captures.byId(captureId);
			if (capture?.survey_id !== surveyId) return requireFound<never>(null, 'capture');
			if (capture.status === 'unread')
				throw new AppError(
					'conflict',
					'Nobody has told yet what the columns of this table are. Tell them first.'
				);
			const work = await surveyJobs(trx, scope, surveyId, clock());
			if (work.some((job) => job.captureId === captureId && job.status !== 'failed'))
				throw new AppError(
					'conflict',
					'This capture is being analysed. Wait until that is done, or cancel it, and confirm again.'
				);
			const now = clock();
			await captures.update(
				capture.id,
				{
					mappings_json: JSON.stringify(confirmed.settings),
					started_at: confirmed.startedAt.toISOString(),
					status: 'queued',
					problem: null
				},
				now
			);
			await appendAudit(
				trx,
				actor,
				{
					action: 'capture.confirmed',
					subjectKind: 'capture',
					subjectId: capture.id,
					detail: { ...confirmed.settings, startedAt: confirmed.startedAt.toISOString() }
				},
				now
			);
			return jobs.enqueue(
				trx,
				analyseCapture,
				{ surveyId, captureId: capture.id },
				{ practiceId: actor.practiceId }
			);
		});
	}

	/** Whether a report that went out rests on the capture: such a capture is evidence and stays. */
	async function restsInIssuedReport(
		trx: Db,
		actor: Actor,
		surveyId: string,
		captureId: string
	): Promise<boolean> {
		const analysisIds = await analysesRepository(trx, scopeOf(actor)).idsOf(captureId);
		const inputs = await trx('report_revisions')
			.join('reports', 'reports.id', 'report_revisions.report_id')
			.join('assessments', 'assessments.id', 'report_revisions.assessment_id')
			.where('reports.practice_id', actor.practiceId)
			.where('reports.survey_id', surveyId)
			.whereIn('report_revisions.status', ['issued', 'superseded', 'withdrawn'])
			.pluck<string[]>('assessments.input_json');
		// Identifiers are random and unique: one that occurs in the assessment's input was put there as such.
		return inputs.some((input) => [captureId, ...analysisIds].some((id) => input.includes(id)));
	}

	async function remove(actor: Actor, surveyId: string, captureId: string): Promise<void> {
		requirePermission(actor, 'capture.write');
		await withTransaction(db, async (trx) => {
			const captures = capturesRepository(trx, scopeOf(actor));
			const capture = await captures.byId(captureId);
			if (capture?.survey_id !== surveyId) return requireFound<never>(null, 'capture');
			if (await restsInIssuedReport(trx, actor, surveyId, captureId))
				throw new AppError(
					'conflict',
					'An issued report rests on this capture, so it stays. Withdrawing the report does not change that: the figures must remain traceable.'
				);
			const now = clock();
			await captures.update(capture.id, { removed_at: now.toISOString() }, now);
			await appendAudit(
				trx,
				actor,
				{
					action: 'capture.removed',
					subjectKind: 'capture',
					subjectId: capture.id,
					detail: { name: capture.name }
				},
				now
			);
			if (capture.status === 'analysed')
				await jobs.enqueue(trx, assessSurvey, { surveyId }, { practiceId: actor.practiceId });
		});
	}

	/** One of the files as it was uploaded, byte for byte. */
	async function originalFile(actor: Actor, captureId: string, fileId: string): Promise<OriginalFile> {
		requirePermission(actor, 'capture.read');
		const captures = capturesRepository(db, scopeOf(actor));
		const capture = requireFound(await captures.byId(captureId), 'file');
		const files = await captures.filesOf([capture.id]);
		const file = requireFound(
			files.find((candidate) => candidate.id === fileId),
			'file'
		);
		return {
			name: file.name,
			size_bytes: file.size_bytes,
			sha256: file.sha256,
			content: blobs.openRead(file.sha256)
		};
	}

	async function job(actor: Actor, jobId: string): Promise<JobState> {
		requirePermission(actor, 'capture.read');
		return requireFound(await jobs.state(actor.practiceId, jobId), 'task');
	}

	/** Stops work; files that were waiting for it and captures that it had taken are set free again. */
	async function cancelJob(actor: Actor, jobId: string): Promise<JobState> {
		requirePermission(actor, 'capture.write');
		requireFound(await jobs.state(actor.practiceId, jobId), 'task');
		await jobs.requestCancel(actor.practiceId, jobId);
		const state = requireFound(await jobs.state(actor.practiceId, jobId), 'task');
		if (state.status === 'cancelled') await releaseAfterCancel(actor, jobId);
		return state;
	}

	async function releaseAfterCancel(actor: Actor, jobId: string): Promise<void> {
		const scope = scopeOf(actor);
		const row = await db('jobs').where({ id: jobId, practice_id: actor.practiceId }).first();
		if (!row) return;
		const payload: unknown = JSON.parse(row.payload_json);
		if (row.kind === unpackArchiveJob.kind)
			await uploadsRepository(db, scope).remove([unpackArchiveJob.payload.parse(payload).uploadId]);
		if (row.kind === recogniseCapture.kind)
			await uploadsRepository(db, scope).remove(recogniseCapture.payload.parse(payload).uploadIds);
		if (row.kind === analyseCapture.kind) {
			const { captureId } = analyseCapture.payload.parse(payload);
			await releaseCapture(db, scope, captureId, clock());
		}
	}

	return { list, detail, confirm, remove, originalFile, job, cancelJob };
}

/** A capture whose analysis was given up shows what it had before: its last analysis, or what was recognised. */
export async function releaseCapture(
	db: Db,
	scope: { practiceId: string },
	captureId: string,
	now: Date
): Promise<void> {
	const earlier = await analysesRepository(db, scope).currentOf(captureId);
	await capturesRepository(db, scope).update(
		captureId,
		{ status: earlier ? 'analysed' : 'recognised', problem: null },
		now
	);
}
