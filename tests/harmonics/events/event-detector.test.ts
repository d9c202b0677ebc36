import { describe, expect, it } from 'vitest';
import { VoltageEventDetector, type EventDetectorSetup } from '$lib/harmonics/events/event-detector';
import { flagIntervals } from '$lib/harmonics/events/flag-intervals';
import { createHalfCycles, measureHalfCycles, type HalfCycles } from '$lib/harmonics/events/half-cycle-rms';
import type { VoltageEvent } from '$lib/harmonics/events/voltage-event';

// Rules of dips, swells and interruptions: IEC 61000-4-30:2015, 5.4 and 5.5 (from memory); 90 %, 110 %, 5 %, hysteresis 2 %.
const CYCLE_S = 0.02;
const WINDOW_S = 0.2;

interface Run {
	events: VoltageEvent[];
	flagged: boolean[];
}

/** levels_pct  [channels][half cycles], all channels with their crossings at the windows' starts; 100 V nominal */
function run(levels_pct: number[][], more: Partial<EventDetectorSetup> = {}, finish = true): Run {
	const events: VoltageEvent[] = [];
	const detector = new VoltageEventDetector({
		nominals: levels_pct.map(() => 100),
		onEvent: (event) => events.push(event),
		...more
	});
	const flagged: boolean[] = [];
	const windows = Math.ceil(levels_pct[0]!.length / 20);
	for (let w = 0; w < windows; w++) {
		const values = levels_pct.map((levels): HalfCycles => ({
			first: 0,
			rms: Float64Array.from({ length: 20 }, (_, k) => levels[20 * w + k] ?? 100)
		}));
		const rms = Float64Array.from(values, (v) => v.rms.reduce((sum, x) => sum + x / 20, 0));
		flagged.push(detector.push({ start_s: w * WINDOW_S, length_s: WINDOW_S }, values, rms));
	}
	if (finish) detector.finish();
	return { events, flagged };
}

/** `length` values of 100 % with others from a place on. */
function course(length: number, ...parts: [at: number, ...values: number[]][]): number[] {
	const levels = new Array<number>(length).fill(100);
	for (const [at, ...values] of parts) values.forEach((value, i) => (levels[at + i] = value));
	return levels;
}

describe('dips and swells', () => {
	it('begin with the first value beyond and end with the first at threshold and hysteresis', () => {
		const { events } = run([course(20, [4, 89.9, 60, 91.9, 90, 92])]);
		expect(events).toHaveLength(1);
		const [dip] = events;
		expect(dip).toMatchObject({ kind: 'dip', isOpen: false, hasGap: false, holdsInterruption: false });
		expect(dip!.start_s).toBeCloseTo(0.04, 12);
		expect(dip!.end_s).toBeCloseTo(0.08, 12);
		expect(dip!.duration_s).toBeCloseTo(0.04, 12);
		expect(dip!.touchedUntil_s).toBeCloseTo(0.09, 12);
		expect(dip!.extreme_pct).toBeCloseTo(60, 9);
		expect(dip!.depth_pct).toBeCloseTo(40, 9);
	});

	it('are none at the threshold itself', () => {
		expect(run([course(20, [4, 90, 90, 110, 110])]).events).toEqual([]);
	});

	it('mirror each other', () => {
		const { events } = run([course(20, [4, 110.1, 125, 108.1, 108])]);
		expect(events).toHaveLength(1);
		expect(events[0]).toMatchObject({ kind: 'swell' });
		expect(events[0]!.end_s).toBeCloseTo(0.07, 12);
		expect(events[0]!.extreme_pct).toBeCloseTo(125, 9);
		expect(events[0]!.depth_pct).toBeCloseTo(25, 9);
	});

	it('can stand on two conductors at the same time', () => {
		const { events } = run([
			course(40, [10, ...new Array<number>(10).fill(60)]),
			course(40, [10, ...new Array<number>(10).fill(130)])
		]);
		expect(events.map(({ kind, channels }) => [kind, channels.map((c) => c.channel)])).toEqual([
			['dip', [0]],
			['swell', [1]]
		]);
	});

	it('of a polyphase system last from the first conductor that leaves to the last that returns', () => {
		const { events } = run([course(40, [10, 80, 80, 80]), course(40), course(40, [12, 70, 40, 70, 91, 91])]);
		expect(events).toHaveLength(1);
		const [dip] = events;
		expect(dip!.start_s).toBeCloseTo(0.1, 12);
		expect(dip!.end_s).toBeCloseTo(0.17, 12);
		expect(dip!.extreme_pct).toBeCloseTo(40, 9);
		expect(dip!.channels.map((c) => c.channel)).toEqual([0, 2]);
		const [a, c] = dip!.channels;
		expect([a!.start_s, a!.end_s, c!.start_s, c!.end_s].map((s) => Number(s.toFixed(9)))).toEqual([
			0.1, 0.13, 0.12, 0.17
		]);
		expect([a!.extreme_pct, c!.extreme_pct].map((v) => Math.round(v))).toEqual([80, 40]);
	});

	it('take other thresholds where a contract states them', () => {
		const thresholds = { dip_pct: 85, swell_pct: 115, interruption_pct: 10, hysteresis_pct: 1 };
		const { events } = run([course(20, [4, 86, 84, 85.9, 86, 114, 116, 114])], { thresholds });
		expect(events.map((e) => e.kind)).toEqual(['dip', 'swell']);
		expect(events[0]!.end_s).toBeCloseTo(0.07, 12);
	});
});

describe('interruptions', () => {
	it('need all conductors; one of three that is gone makes a dip', () => {
		const gone = course(40, [10, ...new Array<number>(10).fill(1)]);
		expect(run([gone, course(40), course(40)]).events.map((e) => e.kind)).toEqual(['dip']);
	});

	it('begin when the last conductor is gone and end when the first is back; the dip around them is told as well', () => {
		const { events } = run([
			course(60, [10, 2, 2, 2, 2, 2, 2, 6.9, 7, 100]),
			course(60, [12, 2, 2, 2, 2, 2, 2, 2, 2, 2, 2])
		]);
		expect(events.map((e) => e.kind)).toEqual(['interruption', 'dip']);
		const [interruption, dip] = events;
		expect(interruption!.start_s).toBeCloseTo(0.12, 12);
		expect(interruption!.end_s).toBeCloseTo(0.17, 12);
		expect(interruption!.channels.map((c) => c.channel)).toEqual([0, 1]);
		expect(dip).toMatchObject({ kind: 'dip', holdsInterruption: true });
		expect(dip!.start_s).toBeCloseTo(0.1, 12);
		expect(dip!.end_s).toBeCloseTo(0.22, 12);
	});

	it('of a single-phase system need the one conductor only', () => {
		const { events } = run([course(20, [4, 3, 3, 3])]);
		expect(events.map(({ kind, holdsInterruption }) => [kind, holdsInterruption])).toEqual([
			['interruption', false],
			['dip', true]
		]);
	});
});

describe('what is on at the end, missing values, and gaps', () => {
	it('an event that the record cuts off is open and lasts to its last value', () => {
		const { events } = run([course(20, [16, 50, 50, 50, 50])]);
		expect(events[0]).toMatchObject({ kind: 'dip', isOpen: true });
		expect(events[0]!.start_s).toBeCloseTo(0.16, 12);
		expect(events[0]!.end_s).toBeCloseTo(0.19 + CYCLE_S, 12);
	});

	it('it can be looked at before it ends', () => {
		const found: VoltageEvent[] = [];
		const detector = new VoltageEventDetector({ nominals: [100], onEvent: (event) => found.push(event) });
		for (let k = 0; k < 5; k++) detector.feed(0, k * 0.01, CYCLE_S, k < 2 ? 100 : 40);
		expect(found).toEqual([]);
		expect(detector.open()).toHaveLength(1);
		expect(detector.open()[0]).toMatchObject({ kind: 'dip', isOpen: true, extreme_pct: 40 });
	});

	it('a missing value neither begins nor ends an event, and is told', () => {
		expect(run([course(20, [4, NaN, NaN])]).events).toEqual([]);
		const { events } = run([course(20, [4, 50, NaN, NaN, 50])]);
		expect(events).toHaveLength(1);
		expect(events[0]!.hasGap).toBe(true);
		expect(events[0]!.duration_s).toBeCloseTo(0.04, 12);
	});

	it('a conductor that falls silent does not hold an event open', () => {
		const silent = course(60, [10, 50, 50, ...new Array<number>(48).fill(NaN)]);
		const { events, flagged } = run([silent, course(60)]);
		expect(events).toHaveLength(1);
		expect(events[0]!.hasGap).toBe(true);
		expect(flagged).toEqual([true, false, false]);
	});

	it('nor does one that gives no values at all any more', () => {
		const found: VoltageEvent[] = [];
		const detector = new VoltageEventDetector({
			nominals: [100, 100],
			onEvent: (event) => found.push(event)
		});
		for (let k = 0; k < 12; k++) {
			if (k < 4) detector.feed(0, k * 0.01, CYCLE_S, k < 2 ? 100 : 40);
			detector.feed(1, k * 0.01 + 0.003, CYCLE_S, 100);
		}
		// The last value of the silent one starts at 0.03 s and counts for two cycles.
		expect(found).toHaveLength(1);
		expect(found[0]!.end_s).toBeCloseTo(0.073, 12);
	});
});

describe('flags', () => {
	it('stand on every window that an event touches, the later ones too', () => {
		const { flagged, events } = run([course(100, [39, ...new Array<number>(22).fill(50)])]);
		expect(flagged).toEqual([false, true, true, true, false]);
		const starts_s = Float64Array.from(flagged, (_, w) => w * WINDOW_S);
		const lengths_s = new Float64Array(flagged.length).fill(WINDOW_S);
		expect([...flagIntervals(starts_s, lengths_s, events)]).toEqual([0, 1, 1, 1, 0]);
	});

	it('stand on both windows where a new train overlaps the old one at a tick', () => {
		const events: VoltageEvent[] = [];
		const detector = new VoltageEventDetector({ nominals: [1], onEvent: (event) => events.push(event) });
		const level = (k: number) => (k >= 32 && k < 36 ? 0.6 : 1);
		const values = (from: number): HalfCycles[] => [
			{ first: 0, rms: Float64Array.from({ length: 20 }, (_, k) => level(from + k)) }
		];
		// Second window 0.2 … 0.4 s, third one starts anew at 0.3 s; the dip from 0.32 to 0.36 s lies in both.
		const flags = [0, 20, 30, 50].map((from) =>
			detector.push({ start_s: from / 100, length_s: WINDOW_S }, values(from))
		);
		expect(flags).toEqual([false, true, true, false]);
		expect(events).toHaveLength(1);
		expect(events[0]!.duration_s).toBeCloseTo(0.04, 12);
	});
});

describe('the sliding reference', () => {
	const settled = course(20 * 3000).fill(95);
	const dipped = [...settled, 90, 84, 84, ...new Array<number>(17).fill(95)];

	it('follows the voltage with a time constant of one minute; dips are measured from it', () => {
		const fixed = run([dipped]).events;
		const sliding = run([dipped], { hasSlidingReference: true }).events;
		expect(fixed.map((e) => Math.round(e.extreme_pct))).toEqual([84]);
		expect(sliding).toHaveLength(1);
		// 3000 windows of 95 %: reference = 95 + 5·0.9967^3000 = 95.000246 % of nominal.
		const reference_pct = 95 + 5 * 0.9967 ** 3000;
		expect(sliding[0]!.extreme_pct).toBeCloseTo((100 * 84) / reference_pct, 9);
	});

	it('stands still while a window is flagged', () => {
		const low = course(20 * 400, [0, ...new Array<number>(20 * 400).fill(80)]);
		const { events } = run([[...low, 100, 100]], { hasSlidingReference: true });
		expect(events.map((e) => Math.round(e.extreme_pct))).toEqual([80]);
		expect(events[0]!.end_s).toBeCloseTo(80, 9);
	});
});

describe('dips of known depth and duration in a sampled three-phase voltage', () => {
	const RATE_HZ = 10_000;
	const FREQUENCY_HZ = 49.7;
	const DURATION_S = 1.6;

	/** Windows of ten cycles, each measured from a slice that reaches one cycle further; returns events of 230 V voltages. */
	function detect(dip: { start_s: number; length_s: number; residual: number; phases: number[] }) {
		const angle = (n: number, c: number) => 2 * Math.PI * (FREQUENCY_HZ * (n / RATE_HZ) - c / 3);
		const samples = [0, 1, 2].map((c) =>
			Float64Array.from({ length: DURATION_S * RATE_HZ }, (_, n) => {
				const inside = n / RATE_HZ >= dip.start_s && n / RATE_HZ < dip.start_s + dip.length_s;
				const size = inside && dip.phases.includes(c) ? dip.residual : 1;
				return 230 * Math.SQRT2 * size * Math.cos(angle(n, c));
			})
		);
		const events: VoltageEvent[] = [];
		const detector = new VoltageEventDetector({
			nominals: [230, 230, 230],
			onEvent: (event) => events.push(event)
		});
		const length = (10 * RATE_HZ) / FREQUENCY_HZ;
		const flagged: boolean[] = [];
		for (let start = 0; start + 1.11 * length < samples[0]!.length; start += length) {
			const base = Math.floor(start);
			const end = Math.ceil(start + 1.1 * length) + 1;
			const values = samples.map((channel, c) => {
				const into = createHalfCycles(10);
				const slice = { samples: channel.slice(base, end), base, end };
				measureHalfCycles(slice, { start, length }, (angle(start, c) * 180) / Math.PI, into);
				return into;
			});
			flagged.push(detector.push({ start_s: start / RATE_HZ, length_s: length / RATE_HZ }, values));
		}
		detector.finish();
		return { events, flagged, window_s: length / RATE_HZ };
	}

	// Each end is known to half a cycle of refresh and half a cycle of the span: the standard's uncertainty of a duration
	// is one cycle (from memory); a deep dip of n cycles shows 0.15 to 1.16 cycles long.
	it.each([
		[0.31, 0.1, 0.5, [0]],
		[0.3921, 0.1, 0.5, [1]],
		[0.4, 0.06, 0.2, [0, 1, 2]],
		[0.2012, 0.3, 0.7, [2]],
		[0.5999, 0.25, 0.0, [0, 1]]
	] as const)('from %d s for %d s to %d on %j', (start_s, length_s, residual, phases) => {
		const { events, flagged, window_s } = detect({ start_s, length_s, residual, phases: [...phases] });
		expect(events).toHaveLength(1);
		const [event] = events;
		expect(event!.kind).toBe('dip');
		expect(Math.abs(event!.extreme_pct - 100 * residual)).toBeLessThan(0.02);
		expect(event!.channels.map((c) => c.channel)).toEqual([...phases]);
		const cycle_s = 1 / FREQUENCY_HZ;
		expect(start_s - event!.start_s).toBeGreaterThan(0);
		expect(start_s - event!.start_s).toBeLessThan(cycle_s);
		expect(Math.abs(event!.duration_s - length_s - cycle_s / 2)).toBeLessThan(0.7 * cycle_s);
		flagged.forEach((flag, w) => {
			if (w * window_s < start_s + length_s && (w + 1) * window_s > start_s) expect(flag).toBe(true);
			else if (
				Math.abs((w + 0.5) * window_s - start_s - length_s / 2) >
				window_s / 2 + length_s / 2 + cycle_s
			)
				expect(flag).toBe(false);
		});
	});

	it('look the same wherever the borders of the windows lie', () => {
		const durations = [0, 1, 2, 3, 4, 5, 6, 7].map((eighth) => {
			const cycle_s = 1 / FREQUENCY_HZ;
			// Starts a whole number of cycles apart, across the border of the second and third window.
			const { events } = detect({
				start_s: (16.25 + eighth) * cycle_s,
				length_s: 4 * cycle_s,
				residual: 0.4,
				phases: [0]
			});
			expect(events).toHaveLength(1);
			return events[0]!.duration_s / cycle_s;
		});
		for (const duration of durations) expect(Math.abs(duration - 4.5)).toBeLessThan(1e-6);
	});
});
