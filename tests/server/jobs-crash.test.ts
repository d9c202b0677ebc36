import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import type { JobRow } from '$lib/server/db/rows';
import { runJob } from '$lib/server/jobs/run-job';
import { openWorld, practiceWithOwner, type World } from '../support/practice-world';
import {
	comtradeCapture,
	confirmAsSuggested,
	onlyCapture,
	surveyAtPoint,
	upload,
	workOff
} from './captures-world';

let world: World;
let owner: Actor;
beforeAll(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Tarn');
});
afterAll(() => world.close());

/** A capture whose analysis is queued and nothing else waits. */
async function queuedAnalysis() {
	const { surveyId } = await surveyAtPoint(world.db, owner);
	await upload(world.container, owner, surveyId, comtradeCapture(3));
	await workOff(world.container);
	const captureId = await onlyCapture(world.db, surveyId);
	const jobId = await confirmAsSuggested(world.container, owner, surveyId, captureId);
	return { surveyId, captureId, jobId };
}
const analysesOf = (captureId: string) => world.db('analyses').where({ capture_id: captureId });
const statusOf = async (captureId: string) =>
	(await world.db('captures').where({ id: captureId }).first('status'))?.status;
const jobOf = async (id: string): Promise<JobRow> => (await world.db('jobs').where({ id }).first())!;

/** Claims the job and lets its process die before the end: nothing is told to the queue. */
async function claimAndDie(jobId: string) {
	const claimed = await world.container.jobs.claim('dies');
	expect(claimed?.id).toBe(jobId);
}

describe('an analysis whose worker dies', () => {
	it('between claim and finish is done once, by the next worker', async () => {
		const { captureId, jobId } = await queuedAnalysis();
		await claimAndDie(jobId);
		expect(await world.container.jobs.claim('too early')).toBeNull();
		await world.container.jobs.releaseAllRunning();
		await workOff(world.container);
		expect(await analysesOf(captureId)).toHaveLength(1);
		expect(await statusOf(captureId)).toBe('analysed');
		expect(await jobOf(jobId)).toMatchObject({ status: 'done', attempts: 2 });
	});

	it('inside the saving transaction leaves nothing behind, and is done once', async () => {
		const { captureId, jobId } = await queuedAnalysis();
		const job = await world.container.jobs.claim('dies while saving');
		const dying = {
			...world.container,
			jobs: {
				...world.container.jobs,
				// The last statement of the transaction never comes through.
				end: async (handle: unknown, ...rest: unknown[]) => {
					void rest;
					if (handle === world.db) return;
					throw new Error('the process is gone');
				}
			}
		} as typeof world.container;
		await runJob(dying, job!, () => false);
		expect(await analysesOf(captureId)).toHaveLength(0);
		const orphans = world
			.db('analysis_series')
			.whereNotIn('analysis_id', world.db('analyses').where({ is_finished: 1 }).select('id'));
		expect(await orphans).toEqual([]);
		expect((await jobOf(jobId)).status).toBe('running');
		await world.container.jobs.releaseAllRunning();
		await workOff(world.container);
		expect(await analysesOf(captureId)).toHaveLength(1);
		expect(await statusOf(captureId)).toBe('analysed');
	});

	it('is not tried for ever, and the capture can be started again', async () => {
		const { surveyId, captureId, jobId } = await queuedAnalysis();
		for (let attempt = 1; attempt <= 3; attempt++) {
			await claimAndDie(jobId);
			await world.container.jobs.releaseAllRunning();
		}
		expect(await world.container.jobs.claim('gives up')).toBeNull();
		expect(await jobOf(jobId)).toMatchObject({
			status: 'failed',
			problem: expect.stringContaining('3 times')
		});
		const { capture } = await world.container.services.captures.detail(owner, surveyId, captureId);
		expect(capture).toMatchObject({ status: 'failed', problem: expect.stringContaining('stopped') });
		await confirmAsSuggested(world.container, owner, surveyId, captureId);
		await workOff(world.container);
		expect(await statusOf(captureId)).toBe('analysed');
	});
});

describe('stopping', () => {
	it('puts the job back when the process goes down, as if it had not been tried', async () => {
		const { captureId, jobId } = await queuedAnalysis();
		const job = await world.container.jobs.claim('stops');
		let asked = 0;
		await runJob(world.container, job!, () => ++asked > 3);
		expect(await jobOf(jobId)).toMatchObject({ status: 'queued', attempts: 0, worker_id: null });
		expect(await statusOf(captureId)).toBe('queued');
		await workOff(world.container);
		expect(await analysesOf(captureId)).toHaveLength(1);
	});

	it('ends a running analysis when somebody cancels it; the capture is as it was before', async () => {
		const { captureId, jobId } = await queuedAnalysis();
		const job = await world.container.jobs.claim('works');
		const running = runJob(world.container, job!, () => false);
		await world.container.services.captures.cancelJob(owner, jobId);
		// The clock of the test stands still; progress asks about cancelling as often as it reports.
		for (let tick = 1; tick < 200 && (await jobOf(jobId)).status === 'running'; tick++) {
			world.setNow(new Date(Date.parse('2026-03-19T09:30:00Z') + 200 * tick).toISOString());
			await new Promise((resolve) => setTimeout(resolve, 5));
		}
		await running;
		expect((await jobOf(jobId)).status).toBe('cancelled');
		expect(await analysesOf(captureId)).toHaveLength(0);
		expect(await statusOf(captureId)).toBe('recognised');
	});

	it('never starts an analysis that was cancelled while it waited', async () => {
		const { captureId, jobId } = await queuedAnalysis();
		const state = await world.container.services.captures.cancelJob(owner, jobId);
		expect(state.status).toBe('cancelled');
		await workOff(world.container);
		expect(await analysesOf(captureId)).toHaveLength(0);
		expect(await statusOf(captureId)).toBe('recognised');
	});
});
