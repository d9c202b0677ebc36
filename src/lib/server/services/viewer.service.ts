import type { Actor } from '../../access/access';
import { encodeTile } from '../../recording/pyramid/tile-codec';
import { AppError, requireFound } from '../app-error';
import { readTile } from '../analysis/read-tile';
import { requirePermission } from '../auth/require-permission';
import { withTransaction } from '../db/database';
import { makePyramid, pyramidKey } from '../jobs/make-pyramid.job';
import type { JobState } from '../jobs/job-queue';
import { captureSurvey } from '../read-models/capture-list';
import {
	captureView,
	parsePyramid,
	windowAt,
	type CaptureView,
	type WindowAt
} from '../read-models/capture-view';
import { analysesRepository } from '../repositories/analyses.repository';
import { capturesRepository } from '../repositories/captures.repository';
import { scopeOf } from '../repositories/scope';
import type { ServiceDeps } from '../service-deps';

const NOT_YET =
	'The view of this capture has not been made yet. Open the viewer: it says how far the work is.';

/** Looking at the samples of a capture, whole or one by one, analysed or not. */
export function createViewerService({ db, blobs, jobs }: ServiceDeps) {
	async function waveformOf(actor: Actor, captureId: string) {
		requirePermission(actor, 'capture.read');
		const capture = requireFound(await capturesRepository(db, scopeOf(actor)).byId(captureId), 'capture');
		if (capture.kind !== 'waveform')
			throw new AppError('conflict', 'This capture is a log of intervals: it has no samples to look at.');
		return capture;
	}

	async function view(actor: Actor, captureId: string): Promise<CaptureView> {
		const capture = await waveformOf(actor, captureId);
		const survey = requireFound(await captureSurvey(db, scopeOf(actor), capture.survey_id), 'survey');
		return captureView(db, scopeOf(actor), survey, capture);
	}

	/**
	 * The work that makes the view of a capture, in hand or ended without one; queued now for a capture from before
	 * views were made at intake. Null when the view is there.
	 */
	async function preparation(actor: Actor, captureId: string): Promise<JobState | null> {
		const capture = await waveformOf(actor, captureId);
		if (capture.pyramid_sha256 !== null) return null;
		const last = await db('jobs')
			.where({ practice_id: actor.practiceId, dedupe_key: pyramidKey(captureId) })
			.first('id', 'status');
		const isOpen = last !== undefined && last.status !== 'done';
		const id = isOpen ? last.id : await queue(actor, capture.survey_id, captureId);
		return jobs.state(actor.practiceId, id);
	}

	function queue(actor: Actor, surveyId: string, captureId: string): Promise<string> {
		return withTransaction(db, (trx) =>
			jobs.enqueue(
				trx,
				makePyramid,
				{ surveyId, captureId },
				{ practiceId: actor.practiceId, dedupeKey: pyramidKey(captureId) }
			)
		);
	}

	/** Tries again after the work failed or was cancelled. */
	async function prepareAgain(actor: Actor, captureId: string): Promise<void> {
		requirePermission(actor, 'capture.write');
		const capture = await waveformOf(actor, captureId);
		if (capture.pyramid_sha256 === null) await queue(actor, capture.survey_id, captureId);
	}

	/**
	 * One tile as tile-codec.ts describes it, and a name that changes with its content.
	 * channelIndexes  empty for all channels
	 * known           name of the tile that the caller has; then nothing is read and `bytes` is null
	 */
	async function tile(
		actor: Actor,
		captureId: string,
		asked: { level: number; tile: number; channelIndexes: readonly number[]; known: string | null }
	): Promise<{ name: string; bytes: Uint8Array<ArrayBuffer> | null }> {
		const pyramid = parsePyramid(await waveformOf(actor, captureId));
		if (!pyramid) throw new AppError('conflict', NOT_YET);
		const { channelCount } = pyramid.stored.layout;
		const channelIndexes =
			asked.channelIndexes.length > 0
				? asked.channelIndexes
				: Array.from({ length: channelCount }, (_, index) => index);
		if (channelIndexes.some((index) => index >= channelCount))
			throw new AppError('invalid', `This capture has channels 0 to ${channelCount - 1}.`);
		const name = `"${pyramid.sha256.slice(0, 32)}-${asked.level}-${asked.tile}-${channelIndexes.join('.')}"`;
		if (asked.known === name) return { name, bytes: null };
		const found = await readTile(
			blobs,
			pyramid.sha256,
			pyramid.stored,
			asked.level,
			asked.tile,
			channelIndexes
		);
		return { name, bytes: encodeTile(requireFound(found, 'tile')) };
	}

	/** The harmonic window over an instant of an analysed capture; null in a gap. */
	async function window(actor: Actor, captureId: string, at_s: number): Promise<WindowAt | null> {
		const capture = await waveformOf(actor, captureId);
		const scope = scopeOf(actor);
		const survey = requireFound(await captureSurvey(db, scope, capture.survey_id), 'survey');
		const analysis = await analysesRepository(db, scope).currentOf(capture.id);
		if (!analysis)
			throw new AppError('conflict', 'This capture is not analysed yet. Confirm what its channels measure.');
		return windowAt(db, scope, survey, analysis, at_s);
	}

	return { view, preparation, prepareAgain, tile, window };
}
