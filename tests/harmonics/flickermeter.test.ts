import { describe, expect, it } from 'vitest';
import { Flickermeter, longTermIntervals, SETTLING_S } from '$lib/harmonics/flicker/flickermeter';
import { longTermSeverity, shortTermSeverity } from '$lib/harmonics/flicker/severity';
import { changesPerMinute, measureFlicker, sinusoidal, TEN_MINUTES, TICK_MS } from './modulated-voltage';

const WAVE = { lamp: '230 V', mains_Hz: 50 } as const;
/** Pst = 1 (IEC 61000-4-15:2010, table 5; 0.894 read in public text). */
const UNIT = changesPerMinute(39, 0.894);
const TWO_HOURS_MS = 7_200_000;

function pstOf(wave: Partial<Parameters<typeof measureFlicker>[0]>): number {
	const { intervals } = measureFlicker({ ...WAVE, ...TEN_MINUTES, ...wave });
	const whole = intervals.filter(({ pst }) => !Number.isNaN(pst));
	expect(whole.map(({ start_ms }) => start_ms)).toEqual([TICK_MS]);
	return whole[0]!.pst;
}

describe('what the flickermeter does not hang on', () => {
	it('gives the same to the last bit however the samples are cut into blocks', () => {
		const wave = { ...WAVE, envelope: UNIT, duration_s: 60, start_s: -30, rate_Hz: 6400 };
		const whole = measureFlicker({ ...wave, block: 60 * 6400 });
		for (const block of [1, 37, 1000, 4097])
			expect(measureFlicker({ ...wave, block }), `${block}`).toEqual(whole);
	});

	it.each([2000, 3199, 6400, 12_800, 15_360])('gives Pst = 1 at a sampling rate of %i Hz', (rate_Hz) => {
		expect(Math.abs(pstOf({ envelope: UNIT, rate_Hz }) - 1)).toBeLessThan(0.002);
	});

	it.each([42.5, 49.3, 57.5])('gives Pst = 1 at a mains frequency of %d Hz', (actual_Hz) => {
		const carrier = (t: number) => Math.sin(2 * Math.PI * actual_Hz * t);
		expect(Math.abs(pstOf({ envelope: UNIT, carrier, rate_Hz: 3200 }) - 1)).toBeLessThan(0.01);
	});

	it('sees nothing in a steady distorted voltage off its nominal frequency', () => {
		const carrier = (t: number) => {
			const angle = 2 * Math.PI * 49.3 * t;
			return (
				Math.sin(angle) +
				0.06 * Math.sin(5 * angle + 1) +
				0.05 * Math.sin(31 * angle) +
				0.05 * Math.sin(33 * angle)
			);
		};
		// The 32nd multiple of 49.3 Hz, which two neighbours make in the square, would fold to 22.4 Hz here.
		expect(pstOf({ carrier, rate_Hz: 6400 })).toBeLessThan(0.02);
	});

	it('refuses a sampling rate that does not carry what it looks at', () => {
		const setup = { ...WAVE, nominalFrequency_Hz: 50, start_ms: 0, onInterval: () => {} } as const;
		expect(() => new Flickermeter({ ...setup, samplingRate_Hz: 1999 })).toThrow(RangeError);
		expect(() => new Flickermeter({ ...setup, samplingRate_Hz: NaN })).toThrow(RangeError);
	});
});

describe('the size of the flicker', () => {
	it.each([0.2, 0.5, 2, 3, 4, 5])('Pst grows with the swing: %d times', (times) => {
		// Linear scaling is how the standard tests the range of a meter; large swings are no longer small beside 1.
		expect(Math.abs(pstOf({ envelope: changesPerMinute(39, times * 0.894) }) / times - 1)).toBeLessThan(0.01);
	});

	it('meets the testing states of IEC 62586-2: Pst 1 at 39 and 4 at 110 changes a minute (from memory)', () => {
		expect(Math.abs(pstOf({ envelope: UNIT }) - 1)).toBeLessThan(0.01);
		expect(Math.abs(pstOf({ envelope: changesPerMinute(110, 4 * 0.722) }) - 4)).toBeLessThan(0.05);
	});

	it('gives the levels that its severity is made of, in falling order', () => {
		const { intervals } = measureFlicker({ ...WAVE, ...TEN_MINUTES, envelope: UNIT });
		const { levels, pst, pInstMax } = intervals.find(({ start_ms }) => start_ms === TICK_MS)!;
		const falling = [pInstMax, levels.p0_1, levels.p1s, levels.p3s, levels.p10s, levels.p50s];
		expect([...falling].sort((a, b) => b - a)).toEqual(falling);
		expect(shortTermSeverity(levels)).toBe(pst);
	});

	it('settles on another level: a step is flicker once, and not in the ten minutes after', () => {
		const ripple = sinusoidal(8.8, 0.25);
		const envelope = (t: number) => ripple(t) * (t < 30 ? 1 : 1.1);
		const before = measureFlicker({ ...WAVE, envelope, duration_s: 59, start_s: -60 });
		expect(before.pInstMax).toBeGreaterThan(100);
		const { intervals } = measureFlicker({ ...WAVE, envelope, duration_s: 120 + 600, start_s: -120 });
		expect(Math.abs(intervals[1]!.pInstMax - 1)).toBeLessThan(0.08);
		const steady = pstOf({ envelope: ripple });
		expect(Math.abs(intervals[1]!.pst / steady - 1)).toBeLessThan(0.002);
	});
});

describe('what is not there', () => {
	it('counts nothing before it has settled', () => {
		const wave = { ...WAVE, start_s: 0 };
		expect(measureFlicker({ ...wave, duration_s: 1 + SETTLING_S })).toEqual({ intervals: [], pInstMax: NaN });
		const { intervals } = measureFlicker({ ...wave, duration_s: 600 });
		expect(intervals).toHaveLength(1);
		expect(intervals[0]!.measured_s).toBeCloseTo(579, 2);
		expect(intervals[0]!.pst).toBeLessThan(0.02);
	});

	it('gives an interval that it saw in part its instantaneous flicker, and no severity', () => {
		const { intervals } = measureFlicker({
			...WAVE,
			envelope: sinusoidal(8.8, 0.25),
			duration_s: 590,
			start_s: 0
		});
		expect(intervals).toHaveLength(1);
		expect(intervals[0]).toMatchObject({ start_ms: TICK_MS, pst: NaN });
		expect(intervals[0]!.measured_s).toBeCloseTo(569, 2);
		expect(intervals[0]!.pInstMax).toBeCloseTo(1, 2);
		expect(intervals[0]!.levels.p50s).toBeCloseTo(1, 1);
	});

	it('takes missing samples for no data: holds, settles anew, and counts what is left', () => {
		const gap = (from_s: number, to_s: number) => (t: number) => (t >= from_s && t < to_s ? NaN : UNIT(t));
		const measure = (envelope: (t: number) => number) =>
			measureFlicker({ ...WAVE, ...TEN_MINUTES, envelope }).intervals.find(
				({ start_ms }) => start_ms === TICK_MS
			)!;
		const short = measure(gap(300, 301));
		expect(short.measured_s).toBeCloseTo(600 - 1 - SETTLING_S, 2);
		expect(Math.abs(short.pst - 1)).toBeLessThan(0.01);
		const long = measure(gap(300, 320));
		expect(long.measured_s).toBeCloseTo(600 - 20 - SETTLING_S, 2);
		expect(long.pst).toBeNaN();
		expect(long.pInstMax).toBeCloseTo(short.pInstMax, 1);
	});

	it('does not take a channel without voltage for one without flicker', () => {
		const dead = measureFlicker({ ...WAVE, ...TEN_MINUTES, envelope: () => 0 });
		expect(dead).toEqual({ intervals: [], pInstMax: NaN });
		const later = measureFlicker({ ...WAVE, ...TEN_MINUTES, envelope: (t) => (t < 50 ? 0 : UNIT(t)) });
		expect(Math.abs(later.intervals[0]!.pst - 1)).toBeLessThan(0.01);
	});
});

describe('long-term severity', () => {
	// Derived from the definition in IEC 61000-4-15; the figure was computed elsewhere.
	const pst: number[] = [...Array<number>(11).fill(0.5), 2];
	const from = (start_ms: number) =>
		pst.map((value, i) => ({ start_ms: start_ms + i * 600_000, pst: value }));

	it('joins twelve Pst by the cube', () => {
		expect(longTermSeverity(pst)).toBeCloseTo(0.92100787466, 10);
		expect(longTermSeverity([...pst.slice(1), NaN])).toBeNaN();
	});

	it('begins on even hours and needs all twelve', () => {
		expect(longTermIntervals(from(TWO_HOURS_MS))).toEqual([
			{ start_ms: TWO_HOURS_MS, plt: longTermSeverity(pst) }
		]);
		expect(longTermIntervals(from(TWO_HOURS_MS + 600_000))).toEqual([]);
		const oneMissing = from(TWO_HOURS_MS).map((one, i) => (i === 5 ? { ...one, pst: NaN } : one));
		expect(longTermIntervals(oneMissing)).toEqual([]);
	});
});
