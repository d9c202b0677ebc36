import { describe, expect, it } from 'vitest';
import {
	TenSecondFrequencies,
	type TenSecondFrequency
} from '$lib/harmonics/aggregation/ten-second-frequency';

// Whole cycles in ten seconds of the clock over their cumulated duration: IEC 61000-4-30:2015, 5.1 (from memory).
// Class A has to keep within 10 mHz; without noise the count itself is good to microhertz.
const TICK = Date.UTC(2024, 2, 5, 10, 0, 0);

/** Windows of ten cycles of cos(2π(f0·t + r·t²/2) + phase) from a moment on; r in Hz/s, t from `from_ms`. */
function run(
	from_ms: number,
	duration_s: number,
	frequency_Hz: number,
	course: {
		ramp?: number;
		phase_deg?: number;
		skip?: (w: number) => boolean;
		flagged?: (w: number) => boolean;
	} = {}
): TenSecondFrequency[] {
	const { ramp = 0, phase_deg = 30, skip = () => false, flagged = () => false } = course;
	const found: TenSecondFrequency[] = [];
	const frequencies = new TenSecondFrequencies((value) => found.push(value));
	const cyclesAt = (t: number) => frequency_Hz * t + (ramp * t * t) / 2;
	let t = 0;
	for (let w = 0; t < duration_s; w++) {
		let length_s = 10 / (frequency_Hz + ramp * t);
		// A window ends ten cycles after it starts.
		for (let pass = 0; pass < 6; pass++)
			length_s -= (cyclesAt(t + length_s) - cyclesAt(t) - 10) / (frequency_Hz + ramp * t);
		const phase = skip(w) ? NaN : 360 * (cyclesAt(t) % 1) + phase_deg;
		frequencies.pushWindow({ start_ms: from_ms + 1000 * t, length_s, flagged: flagged(w) }, phase, 10);
		t += length_s;
	}
	frequencies.finish();
	return found;
}

describe('power frequency over ten seconds', () => {
	it.each([42.5, 49.99, 50, 50.003, 57.5])('of a steady %d Hz is exact to 5 µHz', (frequency_Hz) => {
		const found = run(TICK - 3210, 33.5, frequency_Hz);
		expect(found.map((one) => one.start_ms - TICK)).toEqual([0, 10_000, 20_000]);
		for (const { frequency_Hz: f, cycleCount, cycles_s } of found) {
			expect(Math.abs(f - frequency_Hz)).toBeLessThan(5e-6);
			expect(cycles_s).toBeLessThanOrEqual(10);
			expect(cycles_s).toBeGreaterThan(10 - 2 / frequency_Hz);
			expect(cycleCount).toBe(Math.round(cycles_s * frequency_Hz));
		}
	});

	it('counts 499 or 500 cycles in ten seconds of 50 Hz', () => {
		const counts = [-89.9, -90.1, 0, 90, 180].flatMap((phase_deg) =>
			run(TICK, 10.5, 50, { phase_deg }).map((one) => one.cycleCount)
		);
		expect(counts).toHaveLength(5);
		for (const count of counts) expect([499, 500]).toContain(count);
	});

	it('is the mean over the interval while the frequency ramps', () => {
		const [only] = run(TICK, 11, 49.5, { ramp: 0.1 });
		// The whole cycles lie evenly in the interval: the mean is that of its middle, within a cycle's worth of ramp.
		expect(Math.abs(only!.frequency_Hz - 50)).toBeLessThan(0.1 * 0.02);
	});

	it('counts the overlap of two trains once', () => {
		const found: TenSecondFrequency[] = [];
		const frequencies = new TenSecondFrequencies((value) => found.push(value));
		// A new train every 4.13 s, each window of it ten cycles long, so that the last of the old one overlaps it.
		for (let train = 0; train < 4; train++) {
			for (let w = 0; w * 0.2 < 4.13; w++) {
				const t = train * 4.13 + w * 0.2;
				frequencies.pushWindow(
					{ start_ms: TICK + 1000 * t, length_s: 0.2, flagged: false },
					360 * ((50 * t) % 1),
					10
				);
			}
		}
		expect(found).toHaveLength(1);
		expect(found[0]!.frequency_Hz).toBeCloseTo(50, 5);
		expect(found[0]!.cycleCount).toBeLessThanOrEqual(500);
	});

	it('has no value where more than 1 % of its cycles is missing, and none for cut ends', () => {
		const found = run(TICK, 35, 50, { skip: (w) => w >= 60 && w < 62 });
		expect(found.map((one) => one.start_ms - TICK)).toEqual([0, 20_000]);
		expect(run(TICK + 500, 9, 50)).toEqual([]);
	});

	it('carries the flag of any window in it', () => {
		const found = run(TICK, 31, 50, { flagged: (w) => w === 70 });
		expect(found.map((one) => one.flagged)).toEqual([false, true, false]);
	});
});
