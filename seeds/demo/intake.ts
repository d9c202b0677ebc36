import type { Actor } from '../../src/lib/access/access';
import type { CaptureFile } from '../../src/lib/recording/recording';
import type { Container } from '../../src/lib/server/container';
import { runJob } from '../../src/lib/server/jobs/run-job';

/** Does what the worker process would do, here and now, until nothing waits. A failed job fails the seeding. */
export async function workOff(container: Container): Promise<void> {
	for (;;) {
		const job = await container.jobs.claim('demo');
		if (!job) return;
		await runJob(container, job, () => false);
		const row = await container.db('jobs').where({ id: job.id }).first('status', 'problem');
		if (row?.status !== 'done') throw new Error(`demo: ${job.kind} ended as ${row?.status}: ${row?.problem}`);
	}
}

/** Brings files into a survey as an engineer would: upload, recognition, and (unless told otherwise) the suggested mapping confirmed. */
export async function takeIn(
	container: Container,
	actor: Actor,
	surveyId: string,
	files: readonly CaptureFile[],
	options: { confirm: boolean } = { confirm: true }
): Promise<void> {
	const { uploads, captures } = container.services;
	const received = [];
	for (const file of files) {
		const body = new Blob([file.bytes as Uint8Array<ArrayBuffer>]).stream();
		received.push(await uploads.receive(actor, surveyId, file.name, body as never));
	}
	const outcome = await uploads.intake(
		actor,
		surveyId,
		received.map((upload) => upload.id)
	);
	if (outcome.problems.length > 0) throw new Error(`demo: ${outcome.problems[0]?.sentence}`);
	await workOff(container);
	if (!options.confirm) return;
	const waiting = await container
		.db('captures')
		.where({ survey_id: surveyId, practice_id: actor.practiceId, status: 'recognised' })
		.select('id');
	for (const { id } of waiting) {
		const { capture } = await captures.detail(actor, surveyId, id);
		if (!capture.startedAt) throw new Error('demo: a capture of the demo tells its start');
		const mapped = capture.facts.suggestions.flatMap(({ channelIndex, mapping }) =>
			mapping ? [{ channelIndex, ...mapping }] : []
		);
		await captures.confirm(actor, surveyId, id, {
			settings:
				capture.kind === 'waveform'
					? { kind: 'waveform', channels: mapped }
					: {
							kind: 'trend',
							columns: mapped.map(({ channelIndex, ...rest }) => ({ seriesIndex: channelIndex, ...rest }))
						},
			startedAt: new Date(capture.startedAt)
		});
	}
	await workOff(container);
}
