import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { readCapture } from '$lib/recording/read-capture';
import { samplesPerEntry } from '$lib/recording/pyramid/pyramid-layout';
import { decodeTile, type Tile } from '$lib/recording/pyramid/tile-codec';
import type { CaptureFile, Recording } from '$lib/recording/recording';
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

async function takenIn(files: CaptureFile[]) {
	const { surveyId } = await surveyAtPoint(world.db, owner);
	await upload(world.container, owner, surveyId, files);
	await workOff(world.container);
	return { surveyId, captureId: await onlyCapture(world.db, surveyId) };
}

function read(files: CaptureFile[]): Recording {
	const content = readCapture(files);
	if (!content.ok || content.value.kind !== 'waveform') throw new Error('a waveform was written');
	return content.value;
}

async function tile(
	captureId: string,
	level: number,
	number: number,
	channels: number[] = []
): Promise<Tile> {
	const { bytes } = await world.container.services.viewer.tile(owner, captureId, {
		level,
		tile: number,
		channelIndexes: channels,
		known: null
	});
	return decodeTile(bytes!.buffer);
}

/** Stamps without a rate, as a table of text. */
function textCapture(): CaptureFile[] {
	const lines = ['Time (s);U1 (V);I1 (A)'];
	for (let i = 0; i < 6000; i++)
		lines.push(
			`${(i / 6000).toFixed(7)};${(325 * Math.sin((2 * Math.PI * 50 * i) / 6000)).toFixed(3)};${(i % 97) / 10}`
		);
	return [{ name: 'bench.csv', bytes: new TextEncoder().encode(lines.join('\n')) }];
}

describe('the view of a capture', () => {
	it.each([
		['binary rows, read again from the original', () => comtradeCapture(3)],
		['text, kept in the pyramid', textCapture]
	])('has every sample and the exact extremes of every entry: %s', async (_, make) => {
		const files = make();
		const { captureId } = await takenIn(files);
		const view = await world.container.services.viewer.view(owner, captureId);
		const recording = read(files);
		expect(view.pyramid).not.toBeNull();
		expect(view.sampleCount).toBe(recording.sampleCount);
		for (let level = 0; level < view.pyramid!.levelCount; level++) {
			const each = samplesPerEntry(level);
			const got = await tile(captureId, level, 1 * Number(level === 0));
			for (const { channelIndex, least, greatest } of got.channels) {
				const samples = recording.channels[channelIndex]!.samples;
				for (let k = 0; k < got.entries; k++) {
					const from = (got.firstEntry + k) * each;
					const part = Float32Array.from(samples.subarray(from, from + each));
					expect([least[k], greatest[k]]).toEqual([Math.min(...part), Math.max(...part)]);
				}
			}
		}
	});

	it('reads only the channels asked for, and nothing when the caller has the tile', async () => {
		const { captureId } = await takenIn(comtradeCapture(0.5));
		const all = await tile(captureId, 0, 0);
		const two = await tile(captureId, 0, 0, [4, 1]);
		expect(two.channels.map(({ channelIndex }) => channelIndex)).toEqual([4, 1]);
		expect(two.channels[0]!.least).toEqual(all.channels[4]!.least);
		const asked = { level: 0, tile: 0, channelIndexes: [1] };
		const { viewer } = world.container.services;
		const first = await viewer.tile(owner, captureId, { ...asked, known: null });
		expect(await viewer.tile(owner, captureId, { ...asked, known: first.name })).toEqual({
			name: first.name,
			bytes: null
		});
		await expect(tile(captureId, 0, 77)).rejects.toThrow('does not exist');
		await expect(tile(captureId, 9, 0)).rejects.toThrow('does not exist');
		await expect(tile(captureId, 0, 0, [99])).rejects.toThrow('channels 0 to 6');
	});

	it('is drawn before anybody confirmed the channels, and tells windows and their spectrum after the analysis', async () => {
		const { surveyId, captureId } = await takenIn(comtradeCapture(3));
		const { viewer } = world.container.services;
		const before = await viewer.view(owner, captureId);
		expect(before.isAnalysed).toBe(false);
		expect(before.channels.map(({ from }) => from)).toContain('suggested');
		await expect(viewer.window(owner, captureId, 1)).rejects.toThrow('not analysed');
		await confirmAsSuggested(world.container, owner, surveyId, captureId);
		await workOff(world.container);
		const after = await viewer.view(owner, captureId);
		expect(after.isAnalysed).toBe(true);
		expect(after.channels[0]).toMatchObject({ from: 'confirmed', label: 'A', unit: 'V' });
		expect(after.events).toEqual([]);
		const window = await viewer.window(owner, captureId, 1);
		expect(window!.from_s).toBeLessThanOrEqual(1);
		expect(window!.to_s).toBeGreaterThan(1);
		expect(window!.to_s - window!.from_s).toBeCloseTo(12 / 60.02, 4);
		const current = window!.channels.find(({ quantity }) => quantity === 'current')!;
		// 25 % fifth of 400 A is what was synthesised.
		expect(current.subgroups[5]).toBeCloseTo(100, 0);
		expect(await viewer.window(owner, captureId, 1e5)).toBeNull();
	});

	it('is made anew for a capture that has none, once, and tells how far the work is', async () => {
		const { captureId } = await takenIn(comtradeCapture(0.5));
		await world.db('captures').where({ id: captureId }).update({ pyramid_sha256: null, pyramid_json: null });
		const { viewer } = world.container.services;
		await expect(tile(captureId, 0, 0)).rejects.toThrow('has not been made yet');
		await world.db('jobs').where({ kind: 'make-pyramid' }).update({ dedupe_key: null });
		const first = await viewer.preparation(owner, captureId);
		expect(first!.status).toBe('queued');
		expect((await viewer.preparation(owner, captureId))!.id).toBe(first!.id);
		await workOff(world.container);
		expect(await viewer.preparation(owner, captureId)).toBeNull();
		expect((await tile(captureId, 0, 0)).entries).toBeGreaterThan(0);
	});

	it('leaves nothing behind when the work is cancelled, and can be asked for again', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		await upload(world.container, owner, surveyId, comtradeCapture(1));
		const reading = await world.container.jobs.claim('test');
		const { runJob } = await import('$lib/server/jobs/run-job');
		await runJob(world.container, reading!, () => false);
		const captureId = await onlyCapture(world.db, surveyId);
		const { viewer, captures } = world.container.services;
		const waiting = await viewer.preparation(owner, captureId);
		await captures.cancelJob(owner, waiting!.id);
		await workOff(world.container);
		expect((await viewer.view(owner, captureId)).pyramid).toBeNull();
		expect((await viewer.preparation(owner, captureId))!.status).toBe('cancelled');
		await viewer.prepareAgain(owner, captureId);
		await workOff(world.container);
		expect((await viewer.view(owner, captureId)).pyramid).not.toBeNull();
	});

	it('is nobody else’s business', async () => {
		const { captureId } = await takenIn(comtradeCapture(0.3));
		const stranger = await practiceWithOwner(world.db, 'Foxholt');
		const { viewer } = world.container.services;
		await expect(viewer.view(stranger, captureId)).rejects.toThrow('does not exist');
		await expect(
			viewer.tile(stranger, captureId, { level: 0, tile: 0, channelIndexes: [], known: null })
		).rejects.toThrow('does not exist');
		await expect(viewer.window(stranger, captureId, 0)).rejects.toThrow('does not exist');
	});
});
