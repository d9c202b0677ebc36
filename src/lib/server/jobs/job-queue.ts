import type { Db } from '../db/database';
import { newId } from '../db/ids';
import type { JobRow } from '../db/rows';
import type { JobDefinition } from './job-definition';

const LEASE_MS = 30_000;
const MAX_ATTEMPTS = 3;

export interface JobState {
	id: string;
	kind: string;
	status: JobRow['status'];
	done: number;
	total: number;
	text: string;
	problem: string | null;
}

/** Queue of long work in the database: what is in it survives crash and restart of both processes. */
export function createJobQueue(db: Db, clock: () => Date) {
	const leaseUntil = (): string => new Date(clock().getTime() + LEASE_MS).toISOString();

	/** Queues work inside the caller's transaction. The same dedupe key while a job is unfinished gives that job. */
	async function enqueue<Payload>(
		trx: Db,
		definition: JobDefinition<Payload>,
		payload: Payload,
		options: { practiceId: string; dedupeKey?: string }
	): Promise<string> {
		if (options.dedupeKey) {
			const twin = await trx('jobs').where({ dedupe_key: options.dedupeKey }).first();
			if (twin && (twin.status === 'queued' || twin.status === 'running')) return twin.id;
			if (twin) await trx('jobs').where({ id: twin.id }).update({ dedupe_key: null });
		}
		const id = newId();
		await trx('jobs').insert({
			id,
			practice_id: options.practiceId,
			kind: definition.kind,
			payload_version: definition.version,
			payload_json: JSON.stringify(definition.payload.parse(payload)),
			status: 'queued',
			dedupe_key: options.dedupeKey ?? null,
			created_at: clock().toISOString()
		});
		return id;
	}

	/** Takes the oldest waiting job, or one whose worker let its lease lapse; null when there is none. */
	async function claim(workerId: string): Promise<JobRow | null> {
		const now = clock().toISOString();
		return db.transaction(async (trx) => {
			const job = await trx('jobs')
				.where({ status: 'queued' })
				.orWhere((q) => q.where({ status: 'running' }).andWhere('lease_until', '<', now))
				.orderBy('created_at')
				.first();
			if (!job) return null;
			if (job.attempts >= MAX_ATTEMPTS) {
				await trx('jobs')
					.where({ id: job.id })
					.update({
						status: 'failed',
						finished_at: now,
						problem: `The work stopped unfinished ${MAX_ATTEMPTS} times. Start it again; if it stops again, quote job ${job.id}.`
					});
				return null;
			}
			await trx('jobs')
				.where({ id: job.id })
				.update({
					status: 'running',
					worker_id: workerId,
					lease_until: leaseUntil(),
					attempts: job.attempts + 1,
					started_at: now
				});
			return { ...job, status: 'running' as const };
		});
	}

	/** Records progress and renews the lease; answers whether somebody asked to cancel. */
	async function report(
		id: string,
		done: number,
		total: number,
		text: string
	): Promise<{ cancelRequested: boolean }> {
		await db('jobs').where({ id }).update({
			progress_done: done,
			progress_total: total,
			progress_text: text,
			lease_until: leaseUntil()
		});
		const row = await db('jobs').where({ id }).first('cancel_requested');
		return { cancelRequested: row?.cancel_requested === 1 };
	}

	async function end(
		handle: Db,
		id: string,
		status: 'done' | 'failed' | 'cancelled',
		problem: string | null
	): Promise<void> {
		await handle('jobs').where({ id }).update({
			status,
			problem,
			finished_at: clock().toISOString(),
			lease_until: null,
			worker_id: null
		});
	}

	/** Puts a job back as if it had not been tried: the process stops for reasons that are not the job's. */
	async function release(id: string): Promise<void> {
		await db('jobs')
			.where({ id })
			.update({
				status: 'queued',
				lease_until: null,
				worker_id: null,
				attempts: db.raw('max(attempts - 1, 0)')
			});
	}

	/** At worker start: jobs held by earlier workers of this installation wait again. One worker runs at a time. */
	async function releaseAllRunning(): Promise<number> {
		return db('jobs')
			.where({ status: 'running' })
			.update({ status: 'queued', lease_until: null, worker_id: null });
	}

	async function requestCancel(practiceId: string, id: string): Promise<void> {
		await db('jobs')
			.where({ id, practice_id: practiceId, status: 'queued' })
			.update({ status: 'cancelled', finished_at: clock().toISOString() });
		await db('jobs')
			.where({ id, practice_id: practiceId, status: 'running' })
			.update({ cancel_requested: 1 });
	}

	async function state(practiceId: string, id: string): Promise<JobState | null> {
		const row = await db('jobs').where({ id, practice_id: practiceId }).first();
		if (!row) return null;
		return {
			id: row.id,
			kind: row.kind,
			status: row.status,
			done: row.progress_done,
			total: row.progress_total,
			text: row.progress_text,
			problem: row.problem
		};
	}

	return { enqueue, claim, report, end, release, releaseAllRunning, requestCancel, state };
}

export type JobQueue = ReturnType<typeof createJobQueue>;
