import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import type { ReadingView } from '$lib/server/read-models/readings/reading-views';
import type { Readings } from '$lib/server/read-models/readings/readings';
import { angleBudget } from '$lib/uncertainty/angle-budget';
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
let captureId: string;
beforeAll(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Tarn');
	({ surveyId } = await surveyAtPoint(world.db, owner));
	await upload(world.container, owner, surveyId, comtradeCapture(2));
	await workOff(world.container);
	captureId = await onlyCapture(world.db, surveyId);
	await confirmAsSuggested(world.container, owner, surveyId, captureId);
	await workOff(world.container);
});
afterAll(() => world.close());

async function view(name: ReadingView, window: number | null = null): Promise<Readings> {
	const page = await world.container.services.readings.page(owner, surveyId, captureId, {
		view: name,
		quantity: 'current',
		window,
		order: 'total',
		interval: null
	});
	expect(page.view).toBe(name);
	return page.readings!;
}
const power = async (window: number | null = null) => {
	const { detail } = await view('power', window);
	if (detail.kind !== 'power') throw new Error('the power view was asked for');
	return detail;
};
const sequence = async () => {
	const { detail } = await view('sequence');
	if (detail.kind !== 'sequence') throw new Error('the sequence view was asked for');
	return detail;
};

// The capture: 277 V with 3 % of 5th at 20°, 400 A lagging 20° with 25 % of 5th at 180° and 9 % of 7th; balanced.
const FIFTH_W = 3 * (0.03 * 277) * (0.25 * 400) * Math.cos(((20 - 180 + 5 * 20) * Math.PI) / 180);
const FUNDAMENTAL_W = 3 * 277 * 400 * Math.cos((20 * Math.PI) / 180);

describe('power and direction', () => {
	it('gives the powers the capture was made of, from the samples', async () => {
		const { total, phases, notes, windowCount } = await power();
		expect(windowCount).toBeGreaterThan(5);
		expect(notes).toEqual([]);
		expect(phases.map(({ label }) => label)).toEqual(['A', 'B', 'C']);
		// 16 bits over the range of each channel: 2e-4 is twice what quantising can do.
		expect(Math.abs(total!.fundamentalActivePower_W! / FUNDAMENTAL_W - 1)).toBeLessThan(2e-4);
		expect(Math.abs(total!.activePower_W! / (FUNDAMENTAL_W + FIFTH_W) - 1)).toBeLessThan(2e-4);
		const apparent = 3 * 277 * Math.hypot(1, 0.03) * 400 * Math.hypot(1, 0.25, 0.09);
		expect(Math.abs(total!.effective!.effectiveApparentPower_VA! / apparent - 1)).toBeLessThan(2e-4);
		expect(total!.neutral).toBe('measured');
		expect(total!.effective!.positiveDisplacementFactor).toBeCloseTo(Math.cos(Math.PI / 9), 4);
	});

	it('states P_h with its sign, and a direction only where the angle allows one', async () => {
		const { orders } = await power();
		const fifth = orders[5]!;
		expect(Math.abs(fifth.total!.activePower_W! / FIFTH_W - 1)).toBeLessThan(2e-3);
		expect(fifth.total!.angle_deg).toBeCloseTo(-60, 0);
		expect(fifth.total).toMatchObject({ indication: 'from-network', reason: 'sign-of-power' });
		// No voltage at the 7th: whatever noise says, nothing is indicated.
		expect(orders[7]!.total).toMatchObject({ indication: 'undecided', reason: 'voltage-too-small' });
		expect(orders[0]!.total!.indication).toBeNull();
	});

	it('states how well the angle is known, by the measuring chain of the survey', async () => {
		const { orders, phases, direction } = await power();
		const { U } = angleBudget(direction.chain, 5, direction.load_A);
		// 400 A with 25 % of 5th and 9 % of 7th.
		expect(Math.abs(direction.load_A! / (400 * Math.hypot(1, 0.25, 0.09)) - 1)).toBeLessThan(2e-3);
		expect(Math.abs(orders[5]!.total!.angleUncertainty_deg! / U! - 1)).toBeLessThan(1e-6);
		expect(orders[5]!.phases).toHaveLength(phases.length);
		for (const phase of orders[5]!.phases)
			expect(Math.abs(phase.angleUncertainty_deg! / U! - 1)).toBeLessThan(2e-3);
	});

	it('shows one window by its own figures', async () => {
		const one = await power(3);
		expect(one.windowCount).toBe(1);
		expect(Math.abs(one.total!.fundamentalActivePower_W! / FUNDAMENTAL_W - 1)).toBeLessThan(3e-4);
	});
});

describe('sequence and unbalance', () => {
	it('finds each order in the sequence of a balanced wave, and the rotation', async () => {
		const { sequences, notes } = await sequence();
		expect(notes).toEqual([]);
		expect(sequences!.rotationWords).toBe('A–B–C');
		expect(sequences!.voltage!.u2_pct).toBeLessThan(0.02);
		expect(sequences!.current!.orders[5]!.negative.rms).toBeCloseTo(100, 0);
		expect(sequences!.current!.orders[5]!.positive.rms).toBeLessThan(0.1);
		expect(sequences!.current!.orders[7]!.positive.rms).toBeCloseTo(36, 0);
		expect(sequences!.balanced.slice(5, 8)).toEqual(['negative', 'zero', 'positive']);
	});

	it('sets the measured neutral beside the sum of the lines', async () => {
		const { neutral, neutralNote } = await sequence();
		expect(neutralNote).toBeNull();
		// Balanced and without triplen orders: next to nothing, by either way.
		expect(neutral!.computed!.rms_A).toBeLessThan(0.5);
		expect(neutral!.measured!.rms_A).toBeLessThan(1);
		expect(neutral!.comparison!.difference_A).toBeLessThan(1);
	});
});

describe('what the readings page is asked for', () => {
	it('keeps the window choice in every view, and the trend to the spectrum', async () => {
		for (const name of ['power', 'sequence'] as const) {
			const readings = await view(name, 2);
			expect(readings.choice).toMatchObject({ window: 2 });
			expect(readings.trend).toBeNull();
			expect(readings.quantities).toEqual(['voltage', 'current']);
		}
		expect((await view('spectrum', 2)).choice!.place!.from_s).toBeGreaterThan(0);
	});

	it('says what is not mapped', async () => {
		const { captures } = world.container.services;
		const { capture } = await captures.detail(owner, surveyId, captureId);
		if (capture.settings?.kind !== 'waveform') throw new Error('a waveform was uploaded');
		await captures.confirm(owner, surveyId, captureId, {
			settings: {
				kind: 'waveform',
				channels: capture.settings.channels.filter(
					({ quantity, phase }) => quantity === 'voltage' || phase === 'L1' || phase === 'L3'
				)
			},
			startedAt: new Date(capture.startedAt!)
		});
		await workOff(world.container);
		const found = await power();
		expect(found.notes[0]).toMatch(/^No current is mapped on B: its power is not known/);
		expect(found.phases.map(({ label }) => label)).toEqual(['A', 'C']);
		expect(found.total).toBeNull();
		const { neutral, neutralNote, sequences } = await sequence();
		expect(neutral).toBeNull();
		expect(neutralNote).toMatch(/^The neutral current is neither measured/);
		expect(sequences!.current).toBeNull();
		expect(sequences!.voltage!.u2_pct).toBeLessThan(0.02);
	});
});
