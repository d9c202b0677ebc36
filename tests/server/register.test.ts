import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { DEFAULT_PHASE_NAMES } from '$lib/recording/phase';
import type { ClientFacts } from '$lib/register/client-facts';
import { EMPTY_INSTRUMENT, instrumentFactsFromForm } from '$lib/register/instrument-form';
import type { PointFacts } from '$lib/register/point-facts';
import { parseConfig } from '$lib/server/config';
import { buildContainer, type Container } from '$lib/server/container';
import type { Db } from '$lib/server/db/database';
import { parseListQuery } from '$lib/server/read-models/list-query';
import { CLIENT_SORTS } from '$lib/server/read-models/client-list';
import { INSTRUMENT_SORTS } from '$lib/server/read-models/instrument-list';
import { parseSurveyListQuery } from '$lib/server/read-models/survey-list';
import { openTestDatabase } from '../support/test-database';

const NOW = new Date('2026-03-19T10:00:00Z');

const clientFacts = (name: string): ClientFacts => ({
	name,
	contactName: 'Ada Quill',
	contactEmail: 'ada@example.com',
	contactPhone: '',
	address: '',
	notes: ''
});
const siteFacts = {
	name: 'Harrow Dock 4',
	address: 'Quay 2',
	utility: 'Northern Grid',
	timeZone: 'Europe/London',
	notes: ''
};
const pointFacts: PointFacts = {
	name: 'Main switchboard',
	kind: 'pcc',
	system: 'four-wire',
	nominalVoltage_V: 480,
	nominalFrequency_Hz: 60,
	demand: { method: 'entered', demandCurrent_A: 1000, source: '' },
	shortCircuit: { method: 'current', shortCircuitCurrent_A: 31_200, source: '' },
	phaseNames: DEFAULT_PHASE_NAMES,
	currentTransformer: null,
	voltageTransformer: null,
	limitSetId: null,
	limitSetReason: '',
	notes: ''
};
const instrumentFacts = instrumentFactsFromForm({ ...EMPTY_INSTRUMENT, name: 'Recorder 2' });

let directory: string;
let db: Db;
let built: Container;

/** A practice with one owner. */
async function newPractice(id: string): Promise<Actor> {
	const at = NOW.toISOString();
	await db('practices').insert({
		id,
		name: `Practice ${id}`,
		short_name: id,
		report_prefix: id,
		phase_names_json: JSON.stringify(DEFAULT_PHASE_NAMES),
		created_at: at
	});
	await db('users').insert({
		id: `user-${id}`,
		email: `${id}@example.com`,
		name: `Owner ${id}`,
		created_at: at
	});
	await db('memberships').insert({
		id: `member-${id}`,
		user_id: `user-${id}`,
		practice_id: id,
		role: 'owner',
		created_at: at
	});
	return {
		userId: `user-${id}`,
		name: `Owner ${id}`,
		email: `${id}@example.com`,
		practiceId: id,
		practiceName: `Practice ${id}`,
		membershipId: `member-${id}`,
		role: 'owner',
		clientId: null
	};
}

/** A client with a site, a point, an instrument and a survey. */
async function fill(actor: Actor, name: string) {
	const { register, surveys, instruments } = built.services;
	const client = await register.createClient(actor, clientFacts(name));
	const site = await register.createSite(actor, client, siteFacts);
	const point = await register.createPoint(actor, client, site, pointFacts);
	const instrument = await instruments.create(actor, instrumentFacts);
	const survey = await surveys.create(actor, {
		pointId: point,
		title: `Survey of ${name}`,
		instrumentId: instrument,
		notes: ''
	});
	return { client, site, point, instrument, survey };
}

let a: Actor;
let b: Actor;
let mine: Awaited<ReturnType<typeof fill>>;
let theirs: Awaited<ReturnType<typeof fill>>;

beforeAll(async () => {
	directory = mkdtempSync(join(tmpdir(), 'register-'));
	db = await openTestDatabase(join(directory, 'test.sqlite'));
	built = buildContainer(
		parseConfig({ SINEWRIGHT_MODE: 'test', DATA_DIR: directory, LOG_LEVEL: 'silent' }),
		'script',
		{
			db,
			clock: () => NOW
		}
	);
	a = await newPractice('pa');
	b = await newPractice('pb');
	mine = await fill(a, 'Bellwether Cold Store');
	theirs = await fill(b, 'Kestrel Row Data Hall');
});

afterAll(async () => {
	await db.destroy();
	rmSync(directory, { recursive: true, force: true });
});

const surveyQuery = (address: string) => parseSurveyListQuery(new URLSearchParams(address));
const clientQuery = (address: string) => ({
	...parseListQuery(new URLSearchParams(address), CLIENT_SORTS, 'name'),
	archived: false
});

describe('the register', () => {
	it('keeps what was entered and tells it on the pages', async () => {
		const page = await built.services.register.clientPage(a, mine.client);
		expect(page.client.name).toBe('Bellwether Cold Store');
		expect(page.sites).toMatchObject([{ name: 'Harrow Dock 4', points: 1 }]);
		expect(page.surveys).toMatchObject([{ number: 'S-0001', verdict: null }]);
		const point = await built.services.register.pointPage(a, mine.client, mine.site, mine.point);
		expect(point.facts).toEqual(pointFacts);
	});

	it('refuses a second client of one name, whatever its case', async () => {
		await expect(
			built.services.register.createClient(a, clientFacts('BELLWETHER cold store'))
		).rejects.toMatchObject({
			code: 'conflict'
		});
	});

	it('lets two practices have a client of one name', async () => {
		const id = await built.services.register.createClient(b, clientFacts('Bellwether Cold Store'));
		await built.services.register.setClientArchived(b, id, true);
		const list = await built.services.register.listClients(b, clientQuery(''));
		expect(list.rows.map((row) => row.name)).toEqual(['Kestrel Row Data Hall']);
	});

	it('does not archive a point while a survey is open there', async () => {
		const { register, surveys } = built.services;
		const archive = () => register.setPointArchived(a, mine.client, mine.site, mine.point, true);
		await expect(archive()).rejects.toMatchObject({ code: 'conflict' });
		await surveys.close(a, mine.survey);
		await archive();
		const refused = surveys.create(a, { pointId: mine.point, title: 'Again', instrumentId: '', notes: '' });
		await expect(refused).rejects.toMatchObject({ code: 'conflict' });
		await register.setPointArchived(a, mine.client, mine.site, mine.point, false);
		await surveys.reopen(a, mine.survey);
	});

	it('refuses an address that pairs a client with the site of another', async () => {
		const { register } = built.services;
		const other = await register.createClient(a, clientFacts('Ostler Lane Print Works'));
		await expect(register.sitePage(a, other, mine.site)).rejects.toMatchObject({ code: 'not-found' });
		await expect(register.pointPage(a, other, mine.site, mine.point)).rejects.toMatchObject({
			code: 'not-found'
		});
	});

	it('writes one audit row for each change, with the facts before and after', async () => {
		const { register } = built.services;
		const changed: PointFacts = { ...pointFacts, demand: { method: 'unknown' } };
		await register.updatePoint(a, mine.client, mine.site, mine.point, changed);
		const row = await db('audit_events').where({ action: 'point.changed', subject_id: mine.point }).first();
		expect(row).toMatchObject({ practice_id: 'pa', actor_name: 'Owner pa', at: NOW.toISOString() });
		const detail: unknown = JSON.parse(row?.detail_json ?? '');
		expect(detail).toEqual({ before: pointFacts, after: changed });
		await register.updatePoint(a, mine.client, mine.site, mine.point, pointFacts);
		const actions = await db('audit_events').where({ practice_id: 'pa' }).distinct().pluck('action');
		expect(actions).toEqual(
			expect.arrayContaining([
				'client.created',
				'site.created',
				'point.created',
				'point.archived',
				'point.restored',
				'instrument.created',
				'survey.created',
				'survey.closed',
				'survey.reopened'
			])
		);
	});

	it('changes nothing when the change is refused', async () => {
		const before = await db('audit_events').count<{ n: number }[]>({ n: '*' }).first();
		const foreign = { ...pointFacts, limitSetId: 999_999 };
		await expect(
			built.services.register.updatePoint(a, mine.client, mine.site, mine.point, foreign)
		).rejects.toMatchObject({ code: 'not-found' });
		expect(await db('audit_events').count<{ n: number }[]>({ n: '*' }).first()).toEqual(before);
	});

	it('finds words with signs that have a meaning in the database as they are typed', async () => {
		const { register } = built.services;
		await register.createClient(a, clientFacts('Fifty% & Sons_Ltd'));
		const found = async (q: string) =>
			(await register.listClients(a, clientQuery(new URLSearchParams({ q }).toString()))).rows.map(
				(row) => row.name
			);
		expect(await found('50%')).toEqual([]);
		expect(await found('%')).toEqual(['Fifty% & Sons_Ltd']);
		expect(await found('s_l')).toEqual(['Fifty% & Sons_Ltd']);
	});
});

describe('surveys', () => {
	it('counts numbers per practice without a gap or a double', async () => {
		const { surveys } = built.services;
		const made = await Promise.all(
			Array.from({ length: 5 }, (_, i) =>
				surveys.create(b, { pointId: theirs.point, title: `Round ${i}`, instrumentId: '', notes: '' })
			)
		);
		const numbers = (await db('surveys').whereIn('id', made).pluck('number')).sort();
		expect(numbers).toEqual(['S-0002', 'S-0003', 'S-0004', 'S-0005', 'S-0006']);
		const spent = surveys.create(b, { pointId: mine.point, title: 'No', instrumentId: '', notes: '' });
		await expect(spent).rejects.toMatchObject({ code: 'not-found' });
		const next = await surveys.create(b, {
			pointId: theirs.point,
			title: 'Next',
			instrumentId: '',
			notes: ''
		});
		expect((await db('surveys').where({ id: next }).first())?.number).toBe('S-0007');
	});

	it('lists by filter and words', async () => {
		const { surveys } = built.services;
		expect((await surveys.list(b, surveyQuery('q=Round&sort=number'))).rows.map((row) => row.number)).toEqual(
			['S-0002', 'S-0003', 'S-0004', 'S-0005', 'S-0006']
		);
		expect((await surveys.list(b, surveyQuery('verdict=exceeds'))).total).toBe(0);
		expect((await surveys.list(b, surveyQuery('verdict=none'))).total).toBe(7);
		expect((await surveys.list(b, surveyQuery('status=closed'))).totalUnfiltered).toBe(7);
	});

	it('tells stages from what is there', async () => {
		const header = await built.services.surveys.header(a, mine.survey);
		expect(header.point.shortCircuitRatio).toBeCloseTo(31.2, 12);
		expect(header.stages.captures).toMatchObject({ progress: 'open', text: 'none yet' });
		expect(header.stages.readings).toMatchObject({ progress: 'blocked', text: 'needs a capture' });
		expect(header.stages.verdict.blockedBy).not.toBeNull();
	});
});

describe('instruments', () => {
	it('take their state from the latest due day', async () => {
		const { instruments, calibrations } = built.services;
		const list = async (address: string) => ({
			...parseListQuery(new URLSearchParams(address), INSTRUMENT_SORTS, 'name'),
			archived: false,
			calibration: null
		});
		expect((await instruments.page(a, mine.instrument)).calibration).toBe('none');
		const certificate = { certificateNumber: 'C-1', laboratory: 'Lab', note: '' };
		await calibrations.add(
			a,
			{ instrumentId: mine.instrument },
			{
				...certificate,
				calibratedOn: '2024-03-01',
				dueOn: '2025-03-01'
			}
		);
		expect((await instruments.page(a, mine.instrument)).calibration).toBe('overdue');
		await calibrations.add(
			a,
			{ instrumentId: mine.instrument },
			{
				...certificate,
				calibratedOn: '2025-05-01',
				dueOn: '2026-05-01'
			}
		);
		// 43 days ahead of the clock.
		expect((await instruments.page(a, mine.instrument)).calibration).toBe('soon');
		expect((await instruments.list(a, await list(''))).rows).toMatchObject([
			{ calibration: 'soon', dueOn: '2026-05-01' }
		]);
		const filtered = { ...(await list('')), calibration: 'overdue' as const };
		expect((await instruments.list(a, filtered)).total).toBe(0);
		await expect(
			calibrations.add(
				a,
				{ instrumentId: mine.instrument },
				{
					...certificate,
					calibratedOn: '2026-04-01',
					dueOn: '2027-04-01'
				}
			)
		).rejects.toMatchObject({ code: 'invalid' });
	});
});

describe('search', () => {
	it('finds each kind of thing, within the practice only', async () => {
		const found = async (actor: Actor, q: string) =>
			(await built.services.register.search(actor, q)).map((group) => group.kind);
		expect(await found(a, 'bellwether')).toEqual(['clients', 'surveys']);
		expect(await found(a, 'harrow')).toEqual(['sites']);
		expect(await found(a, 'switchboard')).toEqual(['points']);
		expect(await found(a, 'S-0001')).toEqual(['surveys']);
		expect(await found(a, 'kestrel')).toEqual([]);
		expect(await found(b, 'kestrel')).toEqual(['clients', 'surveys']);
		expect(await found(a, '  ')).toEqual([]);
	});
});

describe('another practice’s rows', () => {
	const facts = { title: 'x', instrumentId: '', decisionRule: 'guarded' as const, notes: '' };
	const cases: [string, () => Promise<unknown>][] = [
		['client page', () => built.services.register.clientPage(a, theirs.client)],
		['client edit', () => built.services.register.updateClient(a, theirs.client, clientFacts('x'))],
		['client archive', () => built.services.register.setClientArchived(a, theirs.client, true)],
		['site form', () => built.services.register.newSite(a, theirs.client)],
		['site create', () => built.services.register.createSite(a, theirs.client, siteFacts)],
		['site page', () => built.services.register.sitePage(a, theirs.client, theirs.site)],
		['site page under own client', () => built.services.register.sitePage(a, mine.client, theirs.site)],
		['site edit', () => built.services.register.updateSite(a, theirs.client, theirs.site, siteFacts)],
		[
			'site edit under own client',
			() => built.services.register.updateSite(a, mine.client, theirs.site, siteFacts)
		],
		['site archive', () => built.services.register.setSiteArchived(a, theirs.client, theirs.site, true)],
		['point form', () => built.services.register.pointForm(a, theirs.client, theirs.site)],
		['point create', () => built.services.register.createPoint(a, theirs.client, theirs.site, pointFacts)],
		['point page', () => built.services.register.pointPage(a, theirs.client, theirs.site, theirs.point)],
		[
			'point page under own site',
			() => built.services.register.pointPage(a, mine.client, mine.site, theirs.point)
		],
		[
			'point edit',
			() => built.services.register.updatePoint(a, mine.client, mine.site, theirs.point, pointFacts)
		],
		[
			'point archive',
			() => built.services.register.setPointArchived(a, theirs.client, theirs.site, theirs.point, true)
		],
		['survey header', () => built.services.surveys.header(a, theirs.survey)],
		['survey point', () => built.services.surveys.point(a, theirs.survey)],
		['survey edit', () => built.services.surveys.update(a, theirs.survey, facts)],
		[
			'survey edit with foreign instrument',
			() => built.services.surveys.update(a, mine.survey, { ...facts, instrumentId: theirs.instrument })
		],
		['survey close', () => built.services.surveys.close(a, theirs.survey)],
		['survey reopen', () => built.services.surveys.reopen(a, theirs.survey)],
		[
			'survey at foreign point',
			() =>
				built.services.surveys.create(a, { pointId: theirs.point, title: 'x', instrumentId: '', notes: '' })
		],
		[
			'survey with foreign instrument',
			() =>
				built.services.surveys.create(a, {
					pointId: mine.point,
					title: 'x',
					instrumentId: theirs.instrument,
					notes: ''
				})
		],
		['instrument page', () => built.services.instruments.page(a, theirs.instrument)],
		['instrument edit', () => built.services.instruments.update(a, theirs.instrument, instrumentFacts)],
		['instrument archive', () => built.services.instruments.setArchived(a, theirs.instrument, true)],
		[
			'calibration',
			() =>
				built.services.calibrations.add(
					a,
					{ instrumentId: theirs.instrument },
					{
						note: '',
						certificateNumber: 'x',
						laboratory: '',
						calibratedOn: '2026-01-01',
						dueOn: '2027-01-01'
					}
				)
		]
	];

	it.each(cases)('%s is not found', async (_name, attempt) => {
		await expect(attempt()).rejects.toMatchObject({ code: 'not-found' });
	});

	it('do not show in lists and choices', async () => {
		const { register, surveys, instruments } = built.services;
		const names = (await register.listClients(a, clientQuery(''))).rows.map((row) => row.name);
		expect(names).not.toContain('Kestrel Row Data Hall');
		expect((await surveys.list(a, surveyQuery(''))).rows.every((row) => row.clientId !== theirs.client)).toBe(
			true
		);
		const choices = await surveys.choices(a);
		expect(choices.points.map((point) => point.id)).toEqual([mine.point]);
		expect(choices.instruments.map((instrument) => instrument.id)).toEqual([mine.instrument]);
		const query = {
			...parseListQuery(new URLSearchParams(), INSTRUMENT_SORTS, 'name'),
			archived: false,
			calibration: null
		};
		expect((await instruments.list(a, query)).total).toBe(1);
	});

	it('are untouched by all these attempts', async () => {
		expect(await db('clients').where({ id: theirs.client }).first()).toMatchObject({
			name: 'Kestrel Row Data Hall',
			archived_at: null
		});
		expect(await db('surveys').where({ id: theirs.survey }).first()).toMatchObject({ status: 'open' });
		expect(await db('audit_events').where({ actor_user_id: a.userId, subject_id: theirs.client })).toEqual(
			[]
		);
	});
});

describe('roles', () => {
	it('a client of the practice enters nothing of the register', async () => {
		const client: Actor = { ...a, role: 'client', clientId: mine.client };
		const { register, surveys, instruments } = built.services;
		for (const attempt of [
			() => register.clientPage(client, mine.client),
			() => register.search(client, 'x'),
			() => surveys.header(client, mine.survey),
			() => instruments.page(client, mine.instrument),
			() => register.createClient(client, clientFacts('y'))
		])
			await expect(attempt()).rejects.toMatchObject({ code: 'forbidden' });
	});
});
