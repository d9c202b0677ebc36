import type { JobState } from '../jobs/job-queue';

const POLL_MS = 150;
const PING_MS = 15_000;

/** Streams that are open now; ended when the process is told to stop, which would otherwise wait for them. */
const open = new Set<() => void>();

/** Ends all open streams. Browsers come back by themselves when the server does. */
export function closeJobEventStreams(): void {
	for (const close of open) close();
}

let listening = false;
function closeOnShutdown(): void {
	if (listening) return;
	listening = true;
	process.once('SIGTERM', closeJobEventStreams);
	// Only where the server handles the signal itself: a lone listener would keep Ctrl-C from ending the process.
	if (process.listenerCount('SIGINT') > 0) process.once('SIGINT', closeJobEventStreams);
}

function hasEnded(state: JobState): boolean {
	return state.status === 'done' || state.status === 'failed' || state.status === 'cancelled';
}

/**
 * Server-sent events of one job: `progress` with its state whenever that changes, `end` with the last one, then the
 * stream closes. A comment every 15 s keeps proxies from cutting a quiet stream.
 */
export function jobEventStream(first: JobState, read: () => Promise<JobState>): ReadableStream<Uint8Array> {
	const encoder = new TextEncoder();
	let stop = () => {};
	return new ReadableStream({
		start(controller) {
			closeOnShutdown();
			let stopped = false;
			let timer: ReturnType<typeof setTimeout> | undefined;
			let sent = '';
			let sentAt_ms = Date.now();
			const close = () => {
				if (stopped) return;
				stop();
				controller.close();
			};
			stop = () => {
				stopped = true;
				clearTimeout(timer);
				open.delete(close);
			};
			open.add(close);

			const write = (text: string) => {
				sentAt_ms = Date.now();
				controller.enqueue(encoder.encode(text));
			};
			const tell = (state: JobState): boolean => {
				const data = JSON.stringify(state);
				if (data !== sent) write(`event: progress\ndata: ${data}\n\n`);
				else if (Date.now() - sentAt_ms >= PING_MS) write(': still here\n\n');
				sent = data;
				if (hasEnded(state)) write(`event: end\ndata: ${data}\n\n`);
				return hasEnded(state);
			};
			const poll = async () => {
				try {
					const state = await read();
					if (stopped) return;
					if (tell(state)) close();
					else timer = setTimeout(poll, POLL_MS);
				} catch {
					// The job is gone or the database is closing: the client asks again and is told.
					close();
				}
			};
			write('retry: 1000\n\n');
			if (tell(first)) close();
			else timer = setTimeout(poll, POLL_MS);
		},
		cancel() {
			stop();
		}
	});
}
