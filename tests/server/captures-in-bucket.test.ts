import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { parseConfig } from '$lib/server/config';
import { buildContainer } from '$lib/server/container';
import { startFakeBucket, type FakeBucket } from '../support/fake-bucket';
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
let bucket: FakeBucket;
beforeAll(async () => {
	world = await openWorld();
	bucket = await startFakeBucket('captures', 'key-of-the-test');
});
afterAll(async () => {
	await world.close();
	await bucket.close();
});

/** A process of its own over the same database and bucket, with nothing in its local folder yet. */
function processOverBucket() {
	return buildContainer(
		parseConfig({
			SINEWRIGHT_MODE: 'test',
			DATA_DIR: mkdtempSync(join(tmpdir(), 'sinewright-bucket-')),
			LOG_LEVEL: 'silent',
			STORAGE: 'bucket',
			BUCKET_NAME: 'captures',
			BUCKET_ENDPOINT: bucket.endpoint,
			BUCKET_ACCESS_KEY: 'key-of-the-test',
			BUCKET_SECRET_KEY: 'secret-of-the-test'
		}),
		'script',
		{ db: world.db, mailTransport: async () => undefined }
	);
}

it('a capture goes from upload to readings over a bucket, each step in a process without local copies', async () => {
	const owner = await practiceWithOwner(world.db, 'Tarn');
	const { surveyId } = await surveyAtPoint(world.db, owner);
	await upload(processOverBucket(), owner, surveyId, comtradeCapture(2));
	expect(bucket.objects.size).toBe(2);
	await workOff(processOverBucket());
	const captureId = await onlyCapture(world.db, surveyId);
	await confirmAsSuggested(processOverBucket(), owner, surveyId, captureId);
	await workOff(processOverBucket());
	const { readings } = processOverBucket().services;
	const page = await readings.page(owner, surveyId, captureId, {
		view: 'spectrum',
		quantity: 'current',
		window: null,
		order: 5,
		interval: null
	});
	const detail = page.readings!.detail;
	if (detail.kind !== 'waveform') throw new Error('a waveform was uploaded');
	// The synthesised truth: 25 % of 400 A at order 5.
	expect(detail.orders.find((row) => row.order === 5)!.phases[0]!.magnitude).toBeCloseTo(100, 1);
	const slice = await readings.waveform(owner, captureId, { from_s: 0, to_s: 0.1, points: 200 });
	expect(slice.channels.length).toBeGreaterThan(0);
});
