import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Actor } from '$lib/access/access';
import { partialSum, residualOf } from '$lib/harmonics/shape/reconstruction';
import type { ReadingView } from '$lib/server/read-models/readings/reading-views';
import type { Readings } from '$lib/server/read-models/readings/readings';
import { openWorld, practiceWithOwner, type World } from '../support/practice-world';
import {
	comtradeCapture,
	confirmAsSuggested,
	onlyCapture,
	surveyAtPoint,
	upload,
	workOff
} from './captures-world';

// The capture: 277 V with 3 % of 5th at 20°, 400 A lagging 20° with 25 % of 5th at 180° and 9 % of 7th; balanced, 60 Hz.
let world: World;
let owner: Actor;
let surveyId: string;
let captureId: string;
beforeAll(async () => {
	world = await openWorld();
	owner = await practiceWithOwner(world.db, 'Tarn');
	({ surveyId } = await surveyAtPoint(world.db, owner));
	await upload(world.container, owner, surveyId, comtradeCapture(4));
	await workOff(world.container);
	captureId = await onlyCapture(world.db, surveyId);
	await confirmAsSuggested(world.container, owner, surveyId, captureId);
	await workOff(world.container);
});
afterAll(() => world.close());

async function detailOf<Kind extends Readings['detail']['kind']>(
	view: ReadingView,
	kind: Kind,
	asked: { window?: number; interval?: '3s' | 'window' } = {}
): Promise<Extract<Readings['detail'], { kind: Kind }>> {
	const page = await world.container.services.readings.page(owner, surveyId, captureId, {
		view,
		quantity: 'current',
		window: asked.window ?? null,
		order: 'total',
		interval: asked.interval ?? null
	});
	const { detail } = page.readings!;
	if (detail.kind !== kind) throw new Error(`${view} gave ${detail.kind}`);
	return detail as Extract<Readings['detail'], { kind: Kind }>;
}

describe('losses and neutral', () => {
	it('gives the loss factor of the spectrum that the capture was made of', async () => {
		const { phases, highestOrder } = await detailOf('losses', 'losses');
		expect(highestOrder).toBe(50);
		const squares = [1, 0.25 ** 2, 0.09 ** 2] as const;
		const factor = (squares[0] + 25 * squares[1] + 49 * squares[2]) / (squares[0] + squares[1] + squares[2]);
		for (const phase of phases) {
			expect(Math.abs(phase.eddyLossFactor! / factor - 1)).toBeLessThan(2e-3);
			expect(phase.kRating).toBe(4);
			expect(phase.neutral!.governs).toBe('line');
			expect(phase.triplen_pctOfFundamental!).toBeLessThan(0.1);
		}
	});
});

describe('over time', () => {
	it('has a panel for every quantity, on the intervals asked for', async () => {
		const { panels, interval, kinds } = await detailOf('over-time', 'over-time', { interval: 'window' });
		expect(interval).toBe('window');
		expect(kinds).toContain('3s');
		const keys = panels.map((panel) => panel.key);
		expect(keys).toEqual(
			expect.arrayContaining([
				'voltage',
				'current',
				'frequency',
				'current-thd',
				'active-power',
				'power-factor',
				'unbalance',
				'crest'
			])
		);
		expect(keys).not.toContain('flicker');
		const thd = panels.find((panel) => panel.key === 'current-thd')!.series[0]!;
		for (const value of thd.values)
			expect(Math.abs(value! - 100 * Math.hypot(0.25, 0.09))).toBeLessThan(0.05);
		const factor = panels.find((panel) => panel.key === 'power-factor')!.series[0]!;
		expect(factor.values[0]!).toBeGreaterThan(0.88);
		expect(factor.values[0]!).toBeLessThan(0.92);
	});
});

describe('interharmonics', () => {
	it('gives levels by order and between, small where the capture has none', async () => {
		const { phases, above, lineSpacing_Hz } = await detailOf('interharmonics', 'interharmonics');
		expect(lineSpacing_Hz).toBe(5);
		const first = phases[0]!;
		expect(Math.abs(first.subgroups[5]! - 100)).toBeLessThan(0.1);
		expect(Math.abs(first.groups[7]! - 36)).toBeLessThan(0.1);
		expect(Math.max(...first.interharmonicSubgroups.map((value) => value ?? 0))).toBeLessThan(0.1);
		expect(above === null || above.highestOrder > 50).toBe(true);
	});
});

describe('wave shape', () => {
	it('builds the measured wave again from the orders that it holds, and leaves out those switched off', async () => {
		const { waves, window } = await detailOf('reconstruction', 'reconstruction', { window: 3 });
		expect(window).toBe(3);
		const current = waves.find((wave) => wave.quantity === 'current' && wave.phase === 'L1')!;
		const leftOut = (orders: number[]) => {
			const row = {
				dc: current.dc,
				components: Float64Array.from(current.components),
				phases_deg: Float64Array.from(current.phases_deg)
			};
			const sum = partialSum(row, { orders, cycles: 2, points: current.wave.length });
			return residualOf(Float64Array.from(current.wave), sum.wave, 2).rms;
		};
		const fundamental = current.components[1]!;
		expect(leftOut([1, 5, 7]) / fundamental).toBeLessThan(1e-3);
		expect(Math.abs(leftOut([1, 7]) / fundamental - 0.25)).toBeLessThan(1e-3);
		expect(current.symmetry.sentence).toBeNull();
		expect(current.notches).toBeNull();
	});
});

describe('spectrum', () => {
	it('has every total by its own rule', async () => {
		const { totals } = await detailOf('spectrum', 'waveform');
		const [first] = totals;
		const thd = 100 * Math.hypot(0.25, 0.09);
		expect(Math.abs(first!.thd40_pct! - thd)).toBeLessThan(0.01);
		expect(Math.abs(first!.thdg_pct! - thd)).toBeLessThan(0.01);
		expect(Math.abs(first!.odd_pct! - thd)).toBeLessThan(0.01);
		expect(first!.even_pct!).toBeLessThan(0.1);
		expect(first!.partialOdd_A!).toBeLessThan(0.5);
	});
});
