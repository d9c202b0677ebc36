import { createHash } from 'node:crypto';
import { existsSync, readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { buildContainer, installContainer } from '$lib/server/container';
import { answerResumableUpload } from '$lib/server/http/resumable-upload';
import { NOW, openWorld, personOf, practiceWithOwner, type World } from '../support/practice-world';
import { comtradeCapture, surveyAtPoint, upload, workOff } from './captures-world';

// Requests and headers as in "tus resumable upload protocol", version 1.0.x, https://tus.io/protocols/resumable-upload.

let world: World;
let owner: Actor;
let colleague: Actor;
let stranger: Actor;
beforeAll(async () => {
	world = await openWorld();
	installContainer(world.container);
	owner = await practiceWithOwner(world.db, 'Tarn');
	colleague = await personOf(world.db, owner.practiceId, 'Tarn', 'Cole', 'engineer', null);
	stranger = await practiceWithOwner(world.db, 'Other');
});
afterAll(() => world.close());

const bytes = new Uint8Array(100_000).map((_value, i) => (i * 31) % 251);
const hashOf = (content: Uint8Array) => createHash('sha256').update(content).digest('hex');
const receiving = () => world.container.services.receiving;

async function tus(
	actor: Actor,
	surveyId: string,
	method: string,
	path: string,
	headers: Record<string, string> = {},
	body?: Uint8Array
): Promise<Response> {
	return answerResumableUpload(
		new Request(`https://pq.example/api/v1/surveys/${surveyId}/upload-sessions${path}`, {
			method,
			headers: { 'tus-resumable': '1.0.0', ...headers },
			...(body ? { body: body as Uint8Array<ArrayBuffer> } : {})
		}),
		actor,
		surveyId
	);
}

async function begin(surveyId: string, options: { sha256?: string; size?: number; name?: string } = {}) {
	const metadata = [`name ${Buffer.from(options.name ?? 'long.csv').toString('base64')}`];
	if (options.sha256) metadata.push(`sha256 ${Buffer.from(options.sha256).toString('base64')}`);
	return tus(owner, surveyId, 'POST', '', {
		'upload-length': String(options.size ?? bytes.length),
		'upload-metadata': metadata.join()
	});
}

async function idOf(response: Response): Promise<string> {
	expect(response.status).toBe(201);
	return (response.headers.get('location') ?? '').split('/').at(-1) ?? '';
}

const piece = (surveyId: string, id: string, from: number, to: number, content = bytes) =>
	tus(
		owner,
		surveyId,
		'PATCH',
		`/${id}`,
		{ 'upload-offset': String(from), 'content-type': 'application/offset+octet-stream' },
		content.slice(from, to)
	);
const lying = () => readdirSync(receiving().folder);

describe('files that arrive in pieces', () => {
	it('go on where they stopped, in another process too, and are kept under their hash', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const id = await idOf(await begin(surveyId, { sha256: hashOf(bytes) }));
		expect((await piece(surveyId, id, 0, 40_000)).headers.get('upload-offset')).toBe('40000');

		// As after a restart: everything made anew on the same database and folder.
		const { config, db, clock } = world.container;
		const again = buildContainer(config, 'script', { db, clock, mailTransport: async () => undefined });
		installContainer(again);
		const { session } = await again.services.receiving.lookUp(owner, surveyId, {
			sha256: hashOf(bytes),
			size_bytes: bytes.length
		});
		expect(session).toEqual({ id, received_bytes: 40_000 });
		expect(await again.services.receiving.interrupted(owner, surveyId)).toMatchObject([
			{ id, name: 'long.csv', received_bytes: 40_000, size_bytes: 100_000 }
		]);
		const head = await tus(owner, surveyId, 'HEAD', `/${id}`);
		expect([head.headers.get('upload-offset'), head.headers.get('upload-length')]).toEqual([
			'40000',
			'100000'
		]);
		expect((await piece(surveyId, id, 10, 20)).status).toBe(409);
		expect((await piece(surveyId, id, 40_000, 100_000)).status).toBe(204);

		const [arrived, twice] = await Promise.all([
			again.services.receiving.arrive(owner, surveyId, id),
			again.services.receiving.arrive(owner, surveyId, id)
		]);
		expect(arrived).toMatchObject({ name: 'long.csv', sha256: hashOf(bytes), size_bytes: 100_000 });
		expect(twice).toEqual(arrived);
		expect(await again.services.receiving.arrive(owner, surveyId, id)).toEqual(arrived);
		expect(new Uint8Array(await again.blobs.read(arrived.sha256))).toEqual(bytes);
		expect(lying()).not.toContain(id);
		installContainer(world.container);
	});

	it('are refused when their bytes are not those that were announced, and nothing stays', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const id = await idOf(await begin(surveyId, { sha256: hashOf(bytes) }));
		const other = bytes.map((value, i) => (i === 77 ? value ^ 1 : value));
		await piece(surveyId, id, 0, other.length, other);
		await expect(receiving().arrive(owner, surveyId, id)).rejects.toMatchObject({
			code: 'invalid',
			message: expect.stringContaining('long.csv is not the file that was chosen')
		});
		expect(lying()).not.toContain(id);
		expect(await world.container.blobs.has(hashOf(other))).toBe(false);
		expect(await world.db('uploads').where({ survey_id: surveyId })).toEqual([]);
	});

	it('do not count as arrived before the last byte', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const id = await idOf(await begin(surveyId));
		await piece(surveyId, id, 0, 99_999);
		await expect(receiving().arrive(owner, surveyId, id)).rejects.toMatchObject({
			code: 'conflict',
			message: expect.stringContaining('99999 of 100000')
		});
	});

	it('are refused before sending when empty, nameless or over the limit, each with a sentence', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		for (const [options, sentence] of [
			[{ size: 0 }, /empty/],
			[{ name: '..' }, /no name/],
			[{ size: world.container.config.uploadLimit_bytes + 1 }, /larger than this installation takes/],
			[{ sha256: 'abc' }, /64 hexadecimal digits/]
		] as const) {
			const response = await begin(surveyId, options);
			expect(response.status).toBe(422);
			expect((await response.json()).message).toMatch(sentence);
		}
		expect(await receiving().interrupted(owner, surveyId)).toEqual([]);
	});

	it('belong to the person who began them and to the survey of the practice', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const id = await idOf(await begin(surveyId, { sha256: hashOf(bytes) }));
		for (const actor of [colleague, stranger]) {
			await expect(receiving().arrive(actor, surveyId, id)).rejects.toMatchObject({ code: 'not-found' });
			await expect(receiving().discard(actor, surveyId, id)).rejects.toMatchObject({ code: 'not-found' });
		}
		const file = { name: 'a.csv', size_bytes: 1, sha256: null };
		await expect(receiving().announce(stranger, surveyId, file)).rejects.toMatchObject({
			code: 'not-found'
		});
		await expect(receiving().interrupted(stranger, surveyId)).rejects.toMatchObject({ code: 'not-found' });
	});

	it('are let go of on request and after a week without a byte, with what lies there', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const unwanted = await idOf(await begin(surveyId));
		const forgotten = await idOf(await begin(surveyId));
		await piece(surveyId, forgotten, 0, 50_000);
		await receiving().discard(owner, surveyId, unwanted);
		expect(lying()).not.toContain(unwanted);

		world.setNow(new Date(Date.parse(NOW) + 6 * 24 * 3600_000).toISOString());
		await receiving().sweep();
		expect(lying()).toContain(forgotten);
		world.setNow(new Date(Date.parse(NOW) + 8 * 24 * 3600_000).toISOString());
		await receiving().sweep();
		world.setNow(NOW);
		expect(existsSync(join(receiving().folder, forgotten))).toBe(false);
		expect(await receiving().interrupted(owner, surveyId)).toEqual([]);
	});
});

describe('content that the practice holds already', () => {
	it('is told before it is sent, and can be used in another survey without sending it', async () => {
		const first = await surveyAtPoint(world.db, owner);
		const second = await surveyAtPoint(world.db, owner);
		const [configuration, data] = comtradeCapture(0.3);
		await upload(world.container, owner, first.surveyId, [configuration!, data!]);
		await workOff(world.container);
		const asked = { sha256: hashOf(data!.bytes), size_bytes: data!.bytes.length };
		expect((await receiving().lookUp(owner, first.surveyId, asked)).held).toMatchObject({
			captureName: 'feeder',
			here: true
		});
		expect((await receiving().lookUp(owner, second.surveyId, asked)).held).toMatchObject({
			surveyId: first.surveyId,
			here: false
		});
		const taken = await receiving().takeHeld(owner, second.surveyId, {
			name: 'feeder.dat',
			sha256: asked.sha256
		});
		expect(taken).toMatchObject({ name: 'feeder.dat', ...asked });

		const theirs = await surveyAtPoint(world.db, stranger);
		expect((await receiving().lookUp(stranger, theirs.surveyId, asked)).held).toBeNull();
		await expect(
			receiving().takeHeld(stranger, theirs.surveyId, { name: 'a.dat', sha256: asked.sha256 })
		).rejects.toMatchObject({ code: 'not-found' });
	});
});

describe('room of a practice', () => {
	it('is refused beyond the quota, counting what is under way, and again on arrival', async () => {
		const lake = await practiceWithOwner(world.db, 'Lake');
		const { surveyId } = await surveyAtPoint(world.db, lake);
		await world.db('practices').where({ id: lake.practiceId }).update({ storage_quota_bytes: 150_000 });
		const file = { name: 'a.csv', size_bytes: 100_000, sha256: null };
		const id = await receiving().announce(lake, surveyId, file);
		await expect(receiving().announce(lake, surveyId, { ...file, name: 'b.csv' })).rejects.toMatchObject({
			code: 'invalid',
			message: expect.stringMatching(/b\.csv .* does not fit/)
		});
		const store = join(receiving().folder, id);
		writeFileSync(store, bytes);
		await world.db('practices').where({ id: lake.practiceId }).update({ storage_quota_bytes: 50_000 });
		await expect(receiving().arrive(lake, surveyId, id)).rejects.toThrow(/a\.csv .* does not fit/);
		expect(existsSync(store)).toBe(true);
		// With room made, the same bytes are taken.
		await world.db('practices').where({ id: lake.practiceId }).update({ storage_quota_bytes: 150_000 });
		expect(await receiving().arrive(lake, surveyId, id)).toMatchObject({ size_bytes: 100_000 });
	});

	it('cannot be raised beyond what the installation allows', async () => {
		const moor = await practiceWithOwner(world.db, 'Moor');
		const { surveyId } = await surveyAtPoint(world.db, moor);
		await world.db('practices').where({ id: moor.practiceId }).update({ storage_quota_bytes: 1e12 });
		world.container.config.storageQuota_bytes = 1000;
		try {
			await expect(
				receiving().announce(moor, surveyId, { name: 'a.csv', size_bytes: 1001, sha256: null })
			).rejects.toThrow(/does not fit/);
		} finally {
			world.container.config.storageQuota_bytes = null;
		}
	});
});
