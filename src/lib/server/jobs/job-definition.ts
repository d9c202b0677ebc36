import type { z } from 'zod';
import type { Db } from '../db/database';

/** Name, payload schema and version of one kind of long work; the handler is elsewhere and loaded late. */
export interface JobDefinition<Payload> {
	kind: string;
	version: number;
	payload: z.ZodType<Payload>;
}

export function defineJob<Payload>(
	kind: string,
	version: number,
	payload: z.ZodType<Payload>
): JobDefinition<Payload> {
	return { kind, version, payload };
}

/** What a handler is given beside its payload. */
export interface JobContext {
	jobId: string;
	practiceId: string;
	/**
	 * Tells how far the work is, keeps the lease, and lets other work of the process breathe.
	 * Throws JobCancelled when somebody asked to stop, JobInterrupted when the process is going down.
	 */
	progress(done: number, total: number, text: string): Promise<void>;
	/**
	 * Marks the job done inside the handler's own saving transaction, so that a crash can neither lose a
	 * result nor make it twice. A handler that saves nothing may leave it out.
	 */
	finish(trx: Db): Promise<void>;
}

export class JobCancelled extends Error {}

/** The process is stopping: the job goes back to the queue as it was. */
export class JobInterrupted extends Error {}

/** The work cannot succeed however often it is tried; `message` is a sentence for the person who asked for it. */
export class JobFailed extends Error {}
