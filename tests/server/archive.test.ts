import { mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { zipSync, type Zippable } from 'fflate';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { ArchiveRefused, unpackArchive } from '$lib/server/storage/archive';
import { openWorld, practiceWithOwner, type World } from '../support/practice-world';
import { comtradeCapture, surveyAtPoint, upload, workOff } from './captures-world';

const text = (content: string) => new TextEncoder().encode(content);
const folder = mkdtempSync(join(tmpdir(), 'sinewright-zip-'));
const LIMITS = { entries: 50, entry_bytes: 1 << 20, total_bytes: 1 << 21 };
let written = 0;

async function unpack(bytes: Uint8Array, limits = LIMITS) {
	const path = join(folder, `${written++}.zip`);
	writeFileSync(path, bytes);
	const files: Record<string, Buffer> = {};
	const leftOut = await unpackArchive(path, 'lot.zip', limits, async (name, _size, content) => {
		files[name] = Buffer.concat((await content.toArray()) as Buffer[]);
	});
	return { files, leftOut };
}

/** ZIP local and central headers carry the same fields at different places (APPNOTE 4.3.7 and 4.3.12). */
function alterHeaders(
	zip: Uint8Array,
	local: number,
	central: number,
	value: number,
	bytes: 2 | 4
): Uint8Array {
	const out = zip.slice();
	const view = new DataView(out.buffer);
	for (let at = 0; at + 46 <= out.length; at++) {
		const signature = view.getUint32(at, true);
		const place = signature === 0x04034b50 ? local : signature === 0x02014b50 ? central : -1;
		if (place < 0) continue;
		if (bytes === 2) view.setUint16(at + place, value, true);
		else view.setUint32(at + place, value, true);
	}
	return out;
}

describe('an archive', () => {
	it('gives its files, packed or stored, out of folders, and leaves litter alone', async () => {
		const content = text('t,u\n0,1\n'.repeat(500));
		const zip = zipSync({
			week: { 'a.csv': content, 'b.csv': [content, { level: 0 }] },
			'__MACOSX/._a.csv': text('x'),
			'Thumbs.db': text('x')
		} as Zippable);
		const { files, leftOut } = await unpack(zip);
		expect(Object.keys(files)).toEqual(['week/a.csv', 'week/b.csv']);
		expect(files['week/a.csv']!.equals(Buffer.from(content))).toBe(true);
		expect(files['week/b.csv']!.equals(Buffer.from(content))).toBe(true);
		expect(leftOut).toEqual([]);
	});

	it('leaves what it cannot open, each with a sentence', async () => {
		const inner = zipSync({ 'a.csv': text('1') });
		const { files, leftOut } = await unpack(
			zipSync({ 'inner.zip': inner, 'empty.csv': text(''), 'good.csv': text('1,2\n') })
		);
		expect(Object.keys(files)).toEqual(['good.csv']);
		expect(leftOut.map(({ sentence }) => sentence)).toEqual([
			'inner.zip in lot.zip is an archive within the archive. Unpack it and send the files themselves.',
			'empty.csv in lot.zip is empty. Copy it from the recorder again.'
		]);
		const locked = alterHeaders(zipSync({ 'a.csv': text('1') }), 6, 8, 1, 2);
		expect((await unpack(locked)).leftOut[0]?.sentence).toMatch(/locked with a password/);
	});

	it('is refused when it would unfold into too much, by what it announces and by what it does', async () => {
		const zeros = new Uint8Array(LIMITS.entry_bytes + 1);
		await expect(unpack(zipSync({ 'a.dat': zeros }))).rejects.toThrow(/unfolds into more/);
		const half = new Uint8Array(LIMITS.entry_bytes);
		await expect(unpack(zipSync({ a: half, b: half, c: half }))).rejects.toThrow(/unfolds into more/);
		const many = Object.fromEntries(Array.from({ length: 51 }, (_, i) => [`${i}.csv`, text('1')]));
		await expect(unpack(zipSync(many))).rejects.toThrow(/holds 51 files; at most 50/);
		// It announces ten bytes and unfolds into a megabyte.
		const liar = alterHeaders(zipSync({ 'a.dat': half }), 22, 24, 10, 4);
		await expect(unpack(liar)).rejects.toThrow(/lot\.zip is damaged at a\.dat/);
	});

	it('is refused when its content is not what its checksum says, or a name leads out of it', async () => {
		const wrong = alterHeaders(zipSync({ 'a.csv': text('1,2,3\n') }), 14, 16, 0x12345678, 4);
		await expect(unpack(wrong)).rejects.toThrow(/lot\.zip is damaged at a\.csv/);
		await expect(unpack(zipSync({ '../../etc/passwd': text('x') }))).rejects.toThrow(/leads out of/);
		await expect(unpack(text('PK\u0003\u0004 and no more'))).rejects.toThrow(ArchiveRefused);
	});

	it('never fails otherwise than with a sentence, whatever is altered in it', async () => {
		const zip = zipSync({ 'a.csv': text('t,u\n0,1\n'.repeat(40)), 'b/c.dat': text('1,0,5\n2,1,6\n') });
		await fc.assert(
			fc.asyncProperty(
				fc.array(fc.tuple(fc.nat(zip.length - 1), fc.nat(255)), { minLength: 1, maxLength: 6 }),
				fc.nat(zip.length),
				async (changes, cut) => {
					const out = zip.slice(0, Math.max(4, zip.length - (cut % 20)));
					for (const [at, value] of changes) if (at < out.length) out[at] = value;
					const failure = await unpack(out).then(
						() => null,
						(cause: unknown) => cause
					);
					if (failure !== null) expect(failure).toBeInstanceOf(ArchiveRefused);
				}
			),
			{ numRuns: 150 }
		);
	});
});

describe('captures in an archive', () => {
	let world: World;
	let owner: Actor;
	beforeAll(async () => {
		world = await openWorld();
		owner = await practiceWithOwner(world.db, 'Tarn');
	});
	afterAll(() => world.close());
	const list = (surveyId: string) =>
		world.container.services.captures.list(owner, surveyId, {
			q: '',
			sort: 'created',
			descending: false,
			page: 1,
			pageSize: 25
		});

	it('become captures as if they had been sent by themselves, whatever the archive is called', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const [configuration, data] = comtradeCapture(0.5);
		const zip = zipSync({
			'monday/feeder.cfg': configuration!.bytes,
			'monday/feeder.dat': data!.bytes,
			'notes.zip': text('PK'),
			'lonely.cfg': configuration!.bytes.slice(0, -1)
		});
		const outcome = await upload(world.container, owner, surveyId, [{ name: 'captures.bin', bytes: zip }]);
		expect(outcome).toMatchObject({ jobs: [{ name: 'captures.bin' }], problems: [], duplicates: [] });
		await workOff(world.container);
		const { captures, jobs } = await list(surveyId);
		expect(captures.rows).toMatchObject([{ name: 'feeder', status: 'recognised', fileCount: 2 }]);
		// What was left out is told beside what was taken.
		expect(jobs).toMatchObject([{ kind: 'unpack-archive', status: 'done' }]);
		expect(jobs[0]!.problem).toMatch(/notes\.zip in captures\.bin is an archive/);
		expect(jobs[0]!.problem).toMatch(/lonely\.cfg came without its data file/);
		expect(await world.db('uploads').where({ survey_id: surveyId })).toEqual([]);
	});

	it('leave nothing behind when the archive is damaged', async () => {
		const { surveyId } = await surveyAtPoint(world.db, owner);
		const zip = zipSync({ 'a.csv': text('t,u\n0,1\n'.repeat(99)) });
		const cut = zip.slice(0, zip.length - 30);
		await upload(world.container, owner, surveyId, [{ name: 'lot.zip', bytes: cut }]);
		await workOff(world.container);
		const { captures, jobs } = await list(surveyId);
		expect(captures.rows).toEqual([]);
		expect(jobs).toMatchObject([{ status: 'failed', problem: expect.stringMatching(/^lot\.zip cannot be/) }]);
		expect(await world.db('uploads').where({ survey_id: surveyId })).toEqual([]);
	});
});
