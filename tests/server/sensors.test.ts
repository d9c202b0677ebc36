import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import {
	EMPTY_INPUT,
	EMPTY_INSTRUMENT,
	instrumentFactsFromForm,
	instrumentFormFromFacts,
	instrumentFormSchema
} from '$lib/register/instrument-form';
import { EMPTY_SENSOR, sensorFactsFromForm } from '$lib/register/sensor-form';
import { parseListQuery } from '$lib/server/read-models/list-query';
import { SENSOR_SORTS } from '$lib/server/read-models/sensor-list';
import { certificateMediaType, LARGEST_CERTIFICATE_BYTES } from '$lib/server/services/certificate-file';
import { openWorld, practiceWithOwner, type World } from '../support/practice-world';

const clamp = sensorFactsFromForm({
	...EMPTY_SENSOR,
	name: 'Clamp 3',
	serialNumber: 'CL-77',
	ratio: '1000 A : 1 V',
	accuracyClass: '0.5'
});
const certificate = {
	certificateNumber: 'C-9',
	laboratory: 'Lab',
	calibratedOn: '2025-05-01',
	dueOn: '2026-05-01',
	note: 'as found within its class'
};
const pdf = new TextEncoder().encode('%PDF-1.7 a certificate');

let world: World;
let owner: Actor;
let stranger: Actor;
let sensor: string;

beforeAll(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Alder');
	stranger = await practiceWithOwner(world.db, 'Birch');
	sensor = await world.container.services.sensors.create(owner, clamp);
});
afterAll(() => world.close());

const list = (address: string) => ({
	...parseListQuery(new URLSearchParams(address), SENSOR_SORTS, 'name'),
	archived: false,
	calibration: null
});

describe('sensors', () => {
	it('come back as they were entered, are found by kind and number, and can be put away', async () => {
		const { sensors } = world.container.services;
		expect((await sensors.page(owner, sensor)).facts).toEqual(clamp);
		for (const q of ['clamp', 'CL-77', ''])
			expect((await sensors.list(owner, list(`q=${q}`))).rows.map((row) => row.id)).toEqual([sensor]);
		expect((await sensors.list(owner, list('q=coil'))).total).toBe(0);
		await sensors.setArchived(owner, sensor, true);
		expect((await sensors.list(owner, list(''))).total).toBe(0);
		expect(await sensors.choices(owner)).toEqual([]);
		await sensors.setArchived(owner, sensor, false);
		expect(await sensors.choices(owner)).toHaveLength(1);
	});

	it('leave a line in the history with both states', async () => {
		const { sensors } = world.container.services;
		await sensors.update(owner, sensor, { ...clamp, ratioError_pct: 0.7 });
		await sensors.update(owner, sensor, clamp);
		const event = await world.db('audit_events').where({ action: 'sensor.changed' }).first();
		expect(JSON.parse(event?.detail_json ?? '{}')).toMatchObject({
			before: { ratioError_pct: null },
			after: { ratioError_pct: 0.7 }
		});
	});
});

describe('inputs of an instrument', () => {
	const form = {
		...EMPTY_INSTRUMENT,
		name: 'Recorder 9',
		inputs: [
			{ ...EMPTY_INPUT, name: 'U1', range: '1000 V', resolutionBits: '16' },
			{ ...EMPTY_INPUT, name: 'I1', quantity: 'current' as const, range: '1 V', resolutionBits: '16 bit' },
			{ ...EMPTY_INPUT, name: 'I2', quantity: 'current' as const, range: '5 A' }
		]
	};

	it('keep their order, their sensor and their unit', async () => {
		const { instruments } = world.container.services;
		const facts = instrumentFactsFromForm(instrumentFormSchema.parse(form));
		facts.inputs[1]!.sensorId = sensor;
		const id = await instruments.create(owner, facts);
		const page = await instruments.page(owner, id);
		expect(page.facts).toEqual(facts);
		expect(page.facts.inputs.map((input) => [input.name, input.rangeRms, input.rangeUnit])).toEqual([
			['U1', 1000, 'V'],
			['I1', 1, 'V'],
			['I2', 5, 'A']
		]);
		expect(page.sensors[sensor]?.name).toBe('Clamp 3');
		expect(instrumentFactsFromForm(instrumentFormFromFacts(page.facts))).toEqual(facts);
		await instruments.update(owner, id, { ...facts, inputs: [...facts.inputs].reverse().slice(0, 2) });
		expect((await instruments.page(owner, id)).facts.inputs.map((input) => input.name)).toEqual(['I2', 'I1']);
		expect((await world.container.services.sensors.page(owner, sensor)).inputs).toMatchObject([
			{ instrument: 'Recorder 9', input: 'I1' }
		]);
	});

	it('refuse names given twice, odd ranges and odd bits, each beside its field', () => {
		const checked = instrumentFormSchema.safeParse({
			...form,
			inputs: [
				{ ...EMPTY_INPUT, name: 'U1', range: 'wide' },
				{ ...EMPTY_INPUT, name: 'u1', resolutionBits: 'many' }
			]
		});
		expect(checked.error?.issues.map((issue) => issue.path.join('.')).sort()).toEqual([
			'inputs.0.range',
			'inputs.1.name',
			'inputs.1.resolutionBits'
		]);
	});

	it('take no sensor of another practice', async () => {
		const facts = instrumentFactsFromForm(instrumentFormSchema.parse(form));
		facts.inputs[1]!.sensorId = sensor;
		const refused = world.container.services.instruments.create(stranger, facts);
		await expect(refused).rejects.toMatchObject({ code: 'invalid' });
	});
});

describe('certificates', () => {
	it('are told by their content and not by their name', () => {
		expect(certificateMediaType(pdf)).toBe('application/pdf');
		expect(certificateMediaType(Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a))).toBe(
			'image/png'
		);
		expect(certificateMediaType(Uint8Array.of(0xff, 0xd8, 0xff, 0xe0))).toBe('image/jpeg');
		expect(certificateMediaType(new TextEncoder().encode('<html>%PDF-'))).toBeNull();
		expect(certificateMediaType(new Uint8Array())).toBeNull();
	});

	it('keep their file byte for byte, for the practice only', async () => {
		const { calibrations, sensors } = world.container.services;
		await calibrations.add(owner, { sensorId: sensor }, certificate, { name: 'C-9 “lab”.pdf', bytes: pdf });
		const page = await sensors.page(owner, sensor);
		// 43 days ahead of the clock.
		expect(page).toMatchObject({ calibration: 'soon', dueOn: '2026-05-01' });
		const kept = page.certificates[0]!;
		expect(kept).toMatchObject({ fileName: 'C-9 “lab”.pdf', note: 'as found within its class' });
		const file = await calibrations.file(owner, kept.id);
		expect(file).toMatchObject({ mediaType: 'application/pdf', size_bytes: pdf.byteLength });
		const chunks: Buffer[] = [];
		for await (const chunk of file.content) chunks.push(chunk as Buffer);
		expect(Buffer.concat(chunks).equals(Buffer.from(pdf))).toBe(true);
		await expect(calibrations.file(stranger, kept.id)).rejects.toMatchObject({ code: 'not-found' });
		await expect(
			calibrations.file({ ...owner, role: 'client', clientId: 'any' }, kept.id)
		).rejects.toMatchObject({ code: 'forbidden' });
		await expect(calibrations.add(stranger, { sensorId: sensor }, certificate, null)).rejects.toMatchObject({
			code: 'not-found'
		});
		const event = await world.db('audit_events').where({ action: 'calibration.added' }).first();
		expect(JSON.parse(event?.detail_json ?? '{}')).toMatchObject({ fileSha256: file.sha256 });
	});

	it('refuse other files and huge ones with a sentence, and keep nothing then', async () => {
		const { calibrations } = world.container.services;
		const count = async () => (await world.db('calibrations').count<{ n: number }[]>({ n: '*' }).first())?.n;
		const before = await count();
		const script = { name: 'certificate.pdf', bytes: new TextEncoder().encode('<script>') };
		await expect(calibrations.add(owner, { sensorId: sensor }, certificate, script)).rejects.toThrow(
			/neither a PDF nor a PNG or JPEG/
		);
		const huge = new Uint8Array(LARGEST_CERTIFICATE_BYTES + 1);
		huge.set(pdf);
		await expect(
			calibrations.add(owner, { sensorId: sensor }, certificate, { name: 'scan.pdf', bytes: huge })
		).rejects.toThrow(/larger than 15 MB/);
		expect(await count()).toBe(before);
	});

	it('are found without a file too', async () => {
		const { calibrations, sensors } = world.container.services;
		const other = await sensors.create(owner, { ...clamp, name: 'Clamp 4' });
		await calibrations.add(owner, { sensorId: other }, certificate);
		const kept = (await sensors.page(owner, other)).certificates[0]!;
		expect(kept.fileName).toBeNull();
		await expect(calibrations.file(owner, kept.id)).rejects.toMatchObject({ code: 'not-found' });
	});
});

describe('search', () => {
	it('finds instruments and sensors of the practice', async () => {
		const { register } = world.container.services;
		const kinds = async (actor: Actor, q: string) =>
			(await register.search(actor, q)).map((group) => group.kind);
		expect(await kinds(owner, 'clamp')).toEqual(['sensors']);
		expect(await kinds(owner, 'recorder 9')).toEqual(['instruments']);
		expect(await kinds(stranger, 'clamp')).toEqual([]);
	});
});
