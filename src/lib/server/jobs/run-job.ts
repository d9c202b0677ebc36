import { setImmediate as nextTurn } from 'node:timers/promises';
import type { Container } from '../container';
import type { JobRow } from '../db/rows';
import { JOB_HANDLERS } from './handlers';
import { JobCancelled, JobFailed, JobInterrupted, type JobContext } from './job-definition';

const REPORT_EVERY_MS = 120;

function jobContext(container: Container, job: JobRow, stopping: () => boolean): JobContext {
	let reported_ms = 0;
	return {
		jobId: job.id,
		practiceId: job.practice_id,
		async progress(done, total, text) {
			await nextTurn();
			if (stopping()) throw new JobInterrupted();
			const now_ms = container.clock().getTime();
			if (done < total && now_ms - reported_ms < REPORT_EVERY_MS) return;
			reported_ms = now_ms;
			const { cancelRequested } = await container.jobs.report(job.id, done, total, text);
			if (cancelRequested) throw new JobCancelled();
		},
		finish: (trx) => container.jobs.end(trx, job.id, 'done', null)
	};
}

/** Runs one claimed job to its end, whatever the end is. Never throws. */
export async function runJob(container: Container, job: JobRow, stopping: () => boolean): Promise<void> {
	const log = container.log.child({ job: job.id, kind: job.kind });
	const { jobs, db } = container;
	try {
		const load = JOB_HANDLERS[job.kind];
		if (!load) throw new JobFailed(`This version of Sinewright does not know the work "${job.kind}".`);
		const handle = await load();
		await handle(container, JSON.parse(job.payload_json), jobContext(container, job, stopping));
		const row = await db('jobs').where({ id: job.id }).first('status');
		if (row?.status === 'running') await jobs.end(db, job.id, 'done', null);
		log.info('job done');
	} catch (cause) {
		if (cause instanceof JobInterrupted) {
			await jobs.release(job.id);
			log.info('job put back, the worker is stopping');
		} else if (cause instanceof JobCancelled) {
			await jobs.end(db, job.id, 'cancelled', null);
			log.info('job cancelled');
		} else if (cause instanceof JobFailed) {
			await jobs.end(db, job.id, 'failed', cause.message);
			log.warn({ reason: cause.message }, 'job failed');
		} else {
			await jobs.end(db, job.id, 'failed', `Something went wrong on our side. Quote reference ${job.id}.`);
			log.error({ err: cause }, 'job broke');
		}
	}
}
