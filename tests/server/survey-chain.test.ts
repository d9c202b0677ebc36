import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { EMPTY_INPUT, EMPTY_INSTRUMENT, instrumentFactsFromForm } from '$lib/register/instrument-form';
import { EMPTY_SENSOR, sensorFactsFromForm } from '$lib/register/sensor-form';
import { loadSurveyChain } from '$lib/server/read-models/survey-chain';
import { calibrationsDue } from '$lib/server/read-models/calibration-due';
import { scopeOf } from '$lib/server/repositories/scope';
import { angleBudget } from '$lib/uncertainty/angle-budget';
import { figureBudget } from '$lib/uncertainty/figure-budget';
import { stepOfInput } from '$lib/uncertainty/recorder-resolution';
import { chainUncertainty } from '$lib/assessment/uncertainty-statement';
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
let surveyId: string;

const clamp = (name: string, change: Partial<typeof EMPTY_SENSOR>) =>
	sensorFactsFromForm({ ...EMPTY_SENSOR, name, ratio: '1000 A : 1 V', ...change });

async function recorder(name: string, sensorIds: string[], change: Partial<typeof EMPTY_INSTRUMENT> = {}) {
	return world.container.services.instruments.create(
		owner,
		instrumentFactsFromForm({
			...EMPTY_INSTRUMENT,
			name,
			harmonicClass: 'I',
			...change,
			inputs: ['1', '2', '3'].flatMap((conductor, i) => [
				{ ...EMPTY_INPUT, name: `U${conductor}`, range: '1000 V', resolutionBits: '16' },
				{
					...EMPTY_INPUT,
					name: `I${conductor}`,
					quantity: 'current' as const,
					range: '1 V',
					resolutionBits: '16',
					sensorId: sensorIds[i] ?? sensorIds[0] ?? ''
				}
			])
		})
	);
}

beforeAll(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Alder');
	surveyId = (await surveyAtPoint(world.db, owner)).surveyId;
});
afterAll(() => world.close());

const use = (instrumentId: string | null) =>
	world.db('surveys').where({ id: surveyId }).update({ instrument_id: instrumentId });
const chain = () => loadSurveyChain(world.db, scopeOf(owner), surveyId);

describe('the measuring chain of a survey', () => {
	it('rests on the worst of the sensors at the inputs, with what they state', async () => {
		const { sensors } = world.container.services;
		const good = await sensors.create(
			owner,
			clamp('Good', { ratioError: '0.5 %', phaseError: '0.3°', highestFrequency: '10 kHz' })
		);
		const poor = await sensors.create(
			owner,
			clamp('Poor', { accuracyClass: '1', phaseError: '0.9°', highestFrequency: '2 kHz' })
		);
		await use(await recorder('R', [good, poor, good]));
		expect((await chain()).currentTransducers).toEqual([
			{
				role: 'sensor',
				kind: 'current-clamp',
				error_pct: 1,
				errorAssumed: false,
				ratedPrimary_A: null,
				phaseError_deg: 0.9,
				highestFrequency_Hz: 2000
			}
		]);
		// 1 V at the input is 1000 A; voltage inputs have no sensor and are measured directly.
		expect(await chain()).toMatchObject({
			currentRange_A: 1000,
			voltageTransducers: [],
			instrumentClass: 'I'
		});
		// The stated phase error of 0.9° counts, and as much again for each order.
		const angle = angleBudget(await chain(), 5, 400);
		expect(angle.contributions.find((one) => one.source === 'current-sensor-angle')?.stated).toBeCloseTo(4.5);
		// 2 kHz is the 33rd order at 60 Hz; nothing is said above.
		const known = chainUncertainty(await chain());
		expect(known.current_pctOfReading(33)).not.toBeNull();
		expect(known.current_pctOfReading(35)).toBeNull();
		expect(known.text).toContain('current sensors are not known');
	});

	it('says not known where nobody stated an error, and takes the instrument’s own where it has one', async () => {
		const { sensors } = world.container.services;
		const unknown = await sensors.create(owner, clamp('Unknown', {}));
		await use(await recorder('R2', [unknown]));
		const figure = {
			quantity: 'current' as const,
			orders: { from: 5, to: 5 },
			value_pct: 4,
			basis: 'agreed' as const,
			evidence: { fullScale: null, load_A: null, spread: null, composition_pct: null }
		};
		expect(figureBudget(await chain(), figure)).toMatchObject({ U: null, notKnown: ['sensor-ratio'] });
		expect(chainUncertainty(await chain()).text).toContain(
			'Nobody has stated the error of the current sensors'
		);
		await use(await recorder('R3', [unknown], { currentSensorError: '2 %' }));
		expect((await chain()).currentTransducers).toMatchObject([{ error_pct: 2 }]);
		expect(figureBudget(await chain(), figure).U).not.toBeNull();
	});

	it('is as before for an instrument whose inputs are not listed', async () => {
		const id = await world.container.services.instruments.create(
			owner,
			instrumentFactsFromForm({ ...EMPTY_INSTRUMENT, name: 'Plain', currentSensorError: '0.5 %' })
		);
		await use(id);
		expect(await chain()).toEqual({
			nominalFrequency_Hz: 60,
			instrumentClass: 'II',
			certificate: [],
			voltageTransducers: [],
			currentTransducers: [
				{ role: 'sensor', kind: 'not-known', error_pct: 0.5, errorAssumed: false, ratedPrimary_A: null }
			],
			currentRange_A: null,
			resolution: null
		});
	});
});

describe('the instrument of a capture', () => {
	it('counts before the survey’s, gives its resolution, and is found on the instrument’s page', async () => {
		const { sensors, captureInstrument, instruments, calibrations } = world.container.services;
		const good = await sensors.create(owner, clamp('Of the capture', { ratioError: '0.25 %' }));
		const named = await recorder('Named', [good], { serialNumber: 'SN-4711' });
		await use(null);
		await upload(world.container, owner, surveyId, comtradeCapture(1));
		await workOff(world.container);
		const capture = await onlyCapture(world.db, surveyId);
		expect((await captureInstrument.of(owner, surveyId, capture)).instrument).toBeNull();
		await captureInstrument.choose(owner, surveyId, capture, named);
		await confirmAsSuggested(world.container, owner, surveyId, capture);
		await workOff(world.container);
		const found = await chain();
		expect(found.currentTransducers).toMatchObject([{ error_pct: 0.25 }]);
		// 16 bits over 2·√2 V, 1000 A to the volt; 7680 Hz for 0.2 s.
		expect(found.resolution?.step_A).toBeCloseTo((2 * Math.SQRT2 * 1000) / 65_536, 9);
		expect(found.resolution?.step_V).toBeCloseTo(stepOfInput(1000, 16), 12);
		expect(found.resolution).toMatchObject({ samplesPerWindow: 1536, windowsPerValue: 1 });

		await calibrations.add(
			owner,
			{ instrumentId: named },
			{
				certificateNumber: 'C-1',
				laboratory: '',
				calibratedOn: '2020-01-01',
				dueOn: '2021-01-01',
				note: ''
			}
		);
		expect((await captureInstrument.of(owner, surveyId, capture)).calibration?.state).toBe('expired');
		expect((await instruments.page(owner, named)).uses).toMatchObject([
			{ surveyId, capture: { id: capture }, calibration: 'expired' }
		]);
		const due = await calibrationsDue(world.db, owner.practiceId, '2026-03-19');
		expect(due.due).toMatchObject([{ kind: 'instrument', id: named, calibration: 'overdue', inUse: true }]);
		const actions = await world.db('audit_events').where({ subject_id: capture }).pluck('action');
		expect(actions).toContain('capture.instrument-named');
	});

	it('is one of the practice', async () => {
		const stranger = await practiceWithOwner(world.db, 'Birch');
		const capture = await onlyCapture(world.db, surveyId);
		const { captureInstrument, instruments } = world.container.services;
		const theirs = await instruments.create(
			stranger,
			instrumentFactsFromForm({ ...EMPTY_INSTRUMENT, name: 'Theirs' })
		);
		await expect(captureInstrument.choose(owner, surveyId, capture, theirs)).rejects.toMatchObject({
			code: 'not-found'
		});
		await expect(captureInstrument.of(stranger, surveyId, capture)).rejects.toMatchObject({
			code: 'not-found'
		});
	});
});
