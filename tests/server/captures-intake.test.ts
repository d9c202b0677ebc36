import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { cleanFileName } from '$lib/server/services/intake/file-name';
import { openWorld, personOf, practiceWithOwner, type World } from '../support/practice-world';
import { bodyOf, comtradeCapture, onlyCapture, surveyAtPoint, upload, workOff } from './captures-world';

let world: World;
let owner: Actor;
let stranger: Actor;
beforeAll(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Tarn');
	stranger = await practiceWithOwner(world.db, 'Other');
});
afterAll(() => world.close());

const text = (content: string) => new TextEncoder().encode(content);
const counts = async (surveyId: string) => ({
	uploads: (await world.db('uploads').where({ survey_id: surveyId })).length,
	captures: (await world.db('captures').where({ survey_id: surveyId })).length
});

describe('taking files in', () => {
	it('makes one capture of CFG and DAT and tells what it recognised', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const files = comtradeCapture(0.5);
		const outcome = await upload(world.container, owner, surveyId, [...files].reverse());
		expect(outcome).toMatchObject({
			jobs: [{ name: 'feeder', files: ['feeder.cfg', 'feeder.dat'] }],
			problems: [],
			duplicates: []
		});
		await workOff(world.container);
		const { capture } = await world.container.services.captures.detail(
			owner,
			surveyId,
			await onlyCapture(world.db, surveyId)
		);
		expect(capture).toMatchObject({
			name: 'feeder',
			status: 'recognised',
			// 15:05:00.250 on the clock of New York in daylight time (UTC−4 since 8 March 2026, common practice).
			startedAt: '2026-03-10T19:05:00.250Z',
			facts: {
				format: 'COMTRADE',
				channelCount: 7,
				samplingRate_Hz: { lowest: 7680, highest: 7680 },
				sampleCount: 3840,
				nominalFrequency_Hz: 60
			}
		});
		expect(capture.facts.suggestions.filter((suggestion) => suggestion.mapping)).toHaveLength(7);
		expect(capture.files.map((file) => file.size_bytes)).toEqual(files.map((file) => file.bytes.length));
		expect(await counts(surveyId)).toEqual({ uploads: 0, captures: 1 });
	});

	it('says so when the same content comes again under another name, and adds nothing', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		await upload(world.container, owner, surveyId, comtradeCapture(0.4));
		await workOff(world.container);
		const again = comtradeCapture(0.4).map((file) => ({
			...file,
			name: file.name.replace('feeder', 'copy')
		}));
		const outcome = await upload(world.container, owner, surveyId, again);
		expect(outcome.jobs).toEqual([]);
		expect(outcome.duplicates).toMatchObject([{ captureName: 'feeder', files: ['copy.cfg', 'copy.dat'] }]);
		expect(await counts(surveyId)).toEqual({ uploads: 0, captures: 1 });
	});

	it('refuses half a set with a sentence that names what is missing, and keeps nothing of it', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const [configuration] = comtradeCapture(0.3);
		const outcome = await upload(world.container, owner, surveyId, [configuration!]);
		expect(outcome.problems[0]?.sentence).toMatch(/feeder\.dat/);
		expect(await counts(surveyId)).toEqual({ uploads: 0, captures: 0 });
	});

	it("ends with the reader's sentence for a file that cannot be read, and keeps nothing of it", async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const [configuration, data] = comtradeCapture(0.3);
		const cut = { name: data!.name, bytes: data!.bytes.slice(0, 10) };
		const outcome = await upload(world.container, owner, surveyId, [configuration!, cut]);
		await workOff(world.container);
		const job = await world.container.services.captures.job(owner, outcome.jobs[0]!.jobId);
		expect(job.status).toBe('failed');
		expect(job.problem).toMatch(/feeder\.dat/);
		expect(await counts(surveyId)).toEqual({ uploads: 0, captures: 0 });
	});

	it('lets the good files of a lot through beside a bad one', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const notes = { name: 'readme.txt', bytes: text('Taken on Tuesday.\nNo samples here.\n') };
		const outcome = await upload(world.container, owner, surveyId, [notes, ...comtradeCapture(0.35)]);
		expect(outcome.jobs).toHaveLength(2);
		await workOff(world.container);
		expect(await counts(surveyId)).toEqual({ uploads: 0, captures: 1 });
		const { jobs } = await world.container.services.captures.list(owner, surveyId, {
			q: '',
			sort: 'created',
			descending: true,
			page: 1,
			pageSize: 25
		});
		expect(jobs).toMatchObject([{ status: 'failed', name: 'readme.txt' }]);
	});

	it('refuses a body that is missing, empty or over the limit', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const { uploads } = world.container.services;
		await expect(uploads.receive(owner, surveyId, 'a.csv', null)).rejects.toMatchObject({ code: 'invalid' });
		await expect(uploads.receive(owner, surveyId, 'a.csv', bodyOf(text('')))).rejects.toThrow(/empty/);
		const limit_bytes = world.container.config.uploadLimit_bytes;
		world.container.config.uploadLimit_bytes = 10;
		try {
			await expect(
				uploads.receive(owner, surveyId, 'a.csv', bodyOf(text('12345678901')))
			).rejects.toMatchObject({
				code: 'invalid',
				message: expect.stringContaining('larger')
			});
		} finally {
			world.container.config.uploadLimit_bytes = limit_bytes;
		}
		expect(await counts(surveyId)).toEqual({ uploads: 0, captures: 0 });
	});

	it('keeps nothing of an upload that breaks off', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const broken = new ReadableStream<Uint8Array>({
			pull(controller) {
				controller.enqueue(text('half of it'));
				controller.error(new Error('connection reset'));
			}
		});
		await expect(
			world.container.services.uploads.receive(owner, surveyId, 'a.csv', broken as never)
		).rejects.toMatchObject({
			code: 'unavailable',
			message: expect.stringContaining('did not arrive whole')
		});
		expect(await counts(surveyId)).toEqual({ uploads: 0, captures: 0 });
	});

	it('lets another practice and a client neither put files in nor see what is there', async () => {
		const { surveyId, clientId } = await surveyAtPoint(world.db, owner);
		const files = comtradeCapture(0.45);
		await expect(upload(world.container, stranger, surveyId, files)).rejects.toMatchObject({
			code: 'not-found'
		});
		const manager = await personOf(
			world.db,
			owner.practiceId,
			'Tarn',
			`Manager ${'x'.repeat(3)}`,
			'client',
			clientId
		);
		await expect(upload(world.container, manager, surveyId, files)).rejects.toMatchObject({
			code: 'forbidden'
		});

		const outcome = await upload(world.container, owner, surveyId, files);
		const { captures } = world.container.services;
		await expect(captures.job(stranger, outcome.jobs[0]!.jobId)).rejects.toMatchObject({ code: 'not-found' });
		await expect(captures.cancelJob(stranger, outcome.jobs[0]!.jobId)).rejects.toMatchObject({
			code: 'not-found'
		});
		await workOff(world.container);
		const id = await onlyCapture(world.db, surveyId);
		const { capture } = await captures.detail(owner, surveyId, id);
		await expect(captures.detail(stranger, surveyId, id)).rejects.toMatchObject({ code: 'not-found' });
		await expect(captures.originalFile(stranger, id, capture.files[0]!.id)).rejects.toMatchObject({
			code: 'not-found'
		});
		await expect(captures.remove(stranger, surveyId, id)).rejects.toMatchObject({ code: 'not-found' });
	});

	it('gives the originals back byte for byte', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const files = comtradeCapture(0.3);
		await upload(world.container, owner, surveyId, files);
		await workOff(world.container);
		const id = await onlyCapture(world.db, surveyId);
		const { capture } = await world.container.services.captures.detail(owner, surveyId, id);
		for (const [i, kept] of capture.files.entries()) {
			const { content } = await world.container.services.captures.originalFile(owner, id, kept.id);
			const chunks = [];
			for await (const chunk of content) chunks.push(chunk as Buffer);
			expect(Buffer.concat(chunks).equals(Buffer.from(files[i]!.bytes))).toBe(true);
		}
	});

	it('lets go of the files when the reading is cancelled before it began', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const outcome = await upload(world.container, owner, surveyId, comtradeCapture(0.3));
		const state = await world.container.services.captures.cancelJob(owner, outcome.jobs[0]!.jobId);
		expect(state.status).toBe('cancelled');
		await workOff(world.container);
		expect(await counts(surveyId)).toEqual({ uploads: 0, captures: 0 });
	});
});

describe('the name of an uploaded file', () => {
	it('is its last part, without control characters', () => {
		expect(cleanFileName('C:\\logs\\feeder\u0000.cfg')).toBe('feeder.cfg');
		expect(cleanFileName('../../etc/feeder.cfg')).toBe('feeder.cfg');
		expect(() => cleanFileName('..')).toThrow(/no name/);
		expect(() => cleanFileName('x'.repeat(300))).toThrow(/200/);
	});
});
