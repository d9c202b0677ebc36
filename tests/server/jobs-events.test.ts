import { describe, expect, it } from 'vitest';
import { closeJobEventStreams, jobEventStream } from '$lib/server/http/job-event-stream';
import type { JobState } from '$lib/server/jobs/job-queue';

const state = (over: Partial<JobState>): JobState => ({
	id: 'job-1',
	kind: 'analyse-capture',
	status: 'running',
	done: 0,
	total: 10,
	text: '',
	problem: null,
	...over
});

async function whole(stream: ReadableStream<Uint8Array>): Promise<string> {
	return new Response(stream).text();
}

/** Events as the browser parses them (WHATWG HTML, "server-sent events": fields, blank line ends an event). */
function eventsOf(text: string): { event: string; data: JobState }[] {
	return text.split('\n\n').flatMap((block) => {
		const event = /^event: (.*)$/m.exec(block)?.[1];
		const data = /^data: (.*)$/m.exec(block)?.[1];
		return event && data ? [{ event, data: JSON.parse(data) as JobState }] : [];
	});
}

describe('the progress stream of a job', () => {
	it('tells each change once, then the end, and closes', async () => {
		const told = [
			state({ done: 3 }),
			state({ done: 3 }),
			state({ done: 7 }),
			state({ status: 'done', done: 10 })
		];
		const text = await whole(jobEventStream(state({ status: 'queued' }), async () => told.shift()!));
		expect(eventsOf(text).map(({ event, data }) => `${event} ${data.status} ${data.done}`)).toEqual([
			'progress queued 0',
			'progress running 3',
			'progress running 7',
			'progress done 10',
			'end done 10'
		]);
	});

	it('ends at once for a job that ended before', async () => {
		const failed = state({ status: 'failed', problem: 'feeder.dat is cut short.' });
		const text = await whole(
			jobEventStream(failed, async () => {
				throw new Error('must not be asked');
			})
		);
		expect(eventsOf(text).at(-1)).toEqual({ event: 'end', data: failed });
	});

	it('closes when the server goes down, so that the process need not wait for it', async () => {
		const open = whole(jobEventStream(state({}), async () => state({})));
		await new Promise((resolve) => setTimeout(resolve, 200));
		closeJobEventStreams();
		expect(eventsOf(await open)).toHaveLength(1);
	});

	it('asks no more once the reader has left', async () => {
		let asked = 0;
		const stream = jobEventStream(state({}), async () => {
			asked++;
			return state({ done: asked });
		});
		await stream.cancel();
		await new Promise((resolve) => setTimeout(resolve, 400));
		expect(asked).toBe(0);
	});
});
