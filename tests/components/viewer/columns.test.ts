import { describe, expect, it } from 'vitest';
import { columnsOf, levelFor, pixelEntries, planView, samplesOf } from '$lib/components/viewer/columns';
import { insideBounds, panBy, zoomAbout } from '$lib/components/viewer/view-range';
import { TileStore } from '$lib/components/viewer/tile-store';
import { samplesPerEntry, TILE_ENTRIES } from '$lib/recording/pyramid/pyramid-layout';
import type { Tile } from '$lib/recording/pyramid/tile-codec';
import { timeAxis } from '$lib/recording/pyramid/time-axis';

const SAMPLES = 200_000;
const RATE_HZ = 10_000;
const samples = Float32Array.from({ length: SAMPLES }, (_, i) => Math.sin(i / 31) + (i === 123_456 ? 9 : 0));
const axis = timeAxis(
	{
		kind: 'rates',
		segments: [
			{ samplingRate_Hz: RATE_HZ, fromSample: 0, toSample: 100_000, start_s: 0 },
			{ samplingRate_Hz: RATE_HZ, fromSample: 100_000, toSample: SAMPLES, start_s: 30 }
		]
	},
	SAMPLES
);
const shape = { sampleCount: SAMPLES, levelCount: 3 };
const DURATION_S = 40;

function tileAt(level: number, tile: number): Tile {
	const each = samplesPerEntry(level);
	const count = Math.min(TILE_ENTRIES, Math.ceil(SAMPLES / each) - tile * TILE_ENTRIES);
	const least = new Float32Array(count);
	const greatest = new Float32Array(count);
	for (let k = 0; k < count; k++) {
		const from = (tile * TILE_ENTRIES + k) * each;
		const part = samples.subarray(from, Math.min(SAMPLES, from + each));
		least[k] = Math.min(...part);
		greatest[k] = Math.max(...part);
	}
	return {
		level,
		firstEntry: tile * TILE_ENTRIES,
		entries: count,
		starts_s: null,
		channels: [{ channelIndex: 0, least, greatest }]
	};
}

describe('what a view shows', () => {
	it('takes the level that has between one and sixteen entries in a pixel', () => {
		expect(levelFor(0.1, 5)).toBe(0);
		expect(levelFor(15.9, 5)).toBe(0);
		expect(levelFor(16, 5)).toBe(1);
		expect(levelFor(1e9, 5)).toBe(4);
	});

	it('shows a single spike in the whole capture, and nothing in a gap', () => {
		const whole = { from_s: 0, to_s: DURATION_S };
		const plan = planView(whole, 400, axis, shape);
		expect(plan.level).toBe(2);
		const pixels = pixelEntries(whole, 400, axis, shape, plan.level, () => true);
		const { least, greatest } = columnsOf(pixels, 0, tileAt);
		const spike_s = 30 + 23_456 / RATE_HZ;
		expect(Math.max(...greatest.filter((value) => !Number.isNaN(value)))).toBeGreaterThan(8);
		const shownAt = greatest.findIndex((value) => value > 8);
		expect(Math.abs(shownAt - (spike_s / DURATION_S) * 400)).toBeLessThanOrEqual(1);
		expect(least[200]).toBeNaN();
		expect(pixels.isComplete).toBe(true);
	});

	it('draws from what stands above while a finer level is on its way', () => {
		const range = { from_s: 1, to_s: 1.5 };
		const pixels = pixelEntries(range, 200, axis, shape, 0, (level) => level > 0);
		expect(pixels.isComplete).toBe(false);
		expect(new Set(pixels.level)).toEqual(new Set([1]));
		const { least, greatest } = columnsOf(pixels, 0, tileAt);
		for (let x = 0; x < 200; x++) {
			const exact = samples.subarray(10_000 + 25 * x, 10_000 + 25 * (x + 1));
			expect(least[x]).toBeLessThanOrEqual(Math.min(...exact));
			expect(greatest[x]).toBeGreaterThanOrEqual(Math.max(...exact));
		}
	});

	it('hands out single samples with their own times', () => {
		const run = samplesOf(99_990, 100_010, 1, axis, tileAt);
		expect(run?.times_s[9]).toBeCloseTo(9.9999, 9);
		expect(run?.times_s[10]).toBe(30);
		expect(Array.from(run!.values[0]!)).toEqual(Array.from(samples.subarray(99_990, 100_010)));
		expect(samplesOf(0, 10, 1, axis, () => null)).toBeNull();
	});
});

describe('moving about', () => {
	const bounds = { duration_s: 100, shortest_s: 0.01 };
	it('keeps the moment under the pointer in its place', () => {
		const next = zoomAbout({ from_s: 10, to_s: 20 }, bounds, 0.5, 12);
		expect((12 - next.from_s) / (next.to_s - next.from_s)).toBeCloseTo(0.2, 12);
		expect(next.to_s - next.from_s).toBeCloseTo(5, 12);
	});
	it('stays inside the capture and above a few samples', () => {
		expect(zoomAbout({ from_s: 10, to_s: 20 }, bounds, 1e6, 12)).toEqual({ from_s: 0, to_s: 100 });
		const closest = zoomAbout({ from_s: 10, to_s: 20 }, bounds, 1e-9, 12);
		expect(closest.to_s - closest.from_s).toBeCloseTo(0.01, 12);
		expect(panBy({ from_s: 90, to_s: 99 }, bounds, 5)).toEqual({ from_s: 91, to_s: 100 });
		expect(insideBounds({ from_s: -5, to_s: 5 }, bounds)).toEqual({ from_s: 0, to_s: 10 });
	});
});

describe('the store of tiles', () => {
	const later = () => new Promise((resolve) => setTimeout(resolve));
	it('gives up what an earlier view wanted, and drops what was used longest ago', async () => {
		const aborted: string[] = [];
		const asked: string[] = [];
		const store = new TileStore(
			({ level, tile }, signal) => {
				asked.push(`${level}/${tile}`);
				signal.addEventListener('abort', () => aborted.push(`${level}/${tile}`));
				return tile === 99 ? new Promise(() => undefined) : Promise.resolve(tileAt(level, tile));
			},
			2.5 * 4 * TILE_ENTRIES,
			{ arrived: () => undefined, failed: () => undefined }
		);
		store.want([{ level: 0, tile: 99 }], []);
		store.want([{ level: 0, tile: 0 }], []);
		expect(aborted).toEqual(['0/99']);
		await later();
		store.want([{ level: 0, tile: 1 }], []);
		await later();
		store.get(0, 0);
		store.want([{ level: 0, tile: 2 }], []);
		await later();
		expect([0, 1, 2].map((tile) => store.has({ level: 0, tile }))).toEqual([true, false, true]);
		store.want([{ level: 0, tile: 0 }], []);
		expect(asked).toEqual(['0/99', '0/0', '0/1', '0/2']);
	});
});
