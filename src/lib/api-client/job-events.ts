export interface JobProgress {
	id: string;
	status: 'queued' | 'running' | 'done' | 'failed' | 'cancelled';
	done: number;
	total: number;
	text: string;
	/** Sentence of a failed job. */
	problem: string | null;
}

/**
 * Follows a job over server-sent events until it ends; the browser reconnects by itself when the server restarts.
 * returns  a function that stops following
 */
export function followJob(
	jobId: string,
	handlers: { onProgress: (state: JobProgress) => void; onEnd: (state: JobProgress) => void }
): () => void {
	const events = new EventSource(`/api/v1/jobs/${jobId}/events`);
	const read = (event: Event) => JSON.parse((event as MessageEvent<string>).data) as JobProgress;
	events.addEventListener('progress', (event) => handlers.onProgress(read(event)));
	events.addEventListener('end', (event) => {
		events.close();
		handlers.onEnd(read(event));
	});
	return () => events.close();
}
