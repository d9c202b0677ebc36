import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { Flickermeter, longTermIntervals, type FlickerInterval } from '$lib/harmonics/flicker/flickermeter';
import { designPerceptionFilters, type Lamp } from '$lib/harmonics/flicker/perception-filters';
import { longTermSeverity } from '$lib/harmonics/flicker/severity';

/** Tables of IEC 61000-4-15:2010; source and status words are in the file. */
interface Tables {
	pInst: Record<
		string,
		{ source: string; sine: Record<string, number>; rectangular: Record<string, number>; gain: number }
	>;
	pst: Record<string, { source: string; status: string; swing_pct: Record<string, number> }>;
}
const tables: Tables = JSON.parse(readFileSync(new URL('./flicker.json', import.meta.url), 'utf8'));
const CASES = [
	['230V-50', '230 V', 50],
	['120V-60', '120 V', 60],
	['120V-50', '120 V', 50],
	['230V-60', '230 V', 60]
] as const;

const TICK_MS = 600_000 * 2_900_000;

interface Modulated {
	lamp: Lamp;
	mains_Hz: 50 | 60;
	/** −1 … 1 over time; the rms swings by swing_pct between its extremes. */
	shape: (t_s: number) => number;
	swing_pct: number;
	duration_s: number;
	rate_Hz?: number;
	/** Distance of the record's start from a ten-minute tick. */
	start_s?: number;
	block?: number;
	harmonics?: (t_s: number) => number;
	actual_Hz?: number;
}

function measure(wave: Modulated): { intervals: FlickerInterval[]; pInstMax: number } {
	const rate_Hz = wave.rate_Hz ?? 2000;
	const block = new Float64Array(wave.block ?? 8192);
	const intervals: FlickerInterval[] = [];
	const meter = new Flickermeter({
		samplingRate_Hz: rate_Hz,
		nominalFrequency_Hz: wave.mains_Hz,
		lamp: wave.lamp,
		start_ms: TICK_MS + 1000 * (wave.start_s ?? -60),
		onInterval: (interval) => intervals.push(interval)
	});
	const count = Math.floor(wave.duration_s * rate_Hz);
	const turn = 2 * Math.PI * (wave.actual_Hz ?? wave.mains_Hz);
	for (let from = 0; from < count; from += block.length) {
		const size = Math.min(block.length, count - from);
		for (let i = 0; i < size; i++) {
			const t = (from + i) / rate_Hz;
			const envelope = 1 + (wave.shape(t) * wave.swing_pct) / 200;
			block[i] = 325 * envelope * Math.sin(turn * t) + (wave.harmonics?.(t) ?? 0);
		}
		meter.push(block, 0, size);
	}
	meter.finish();
	return { intervals, pInstMax: meter.pInstMax };
}

const square = (frequency_Hz: number) => (t: number) => ((t * frequency_Hz) % 1 < 0.5 ? 1 : -1);
const sine = (frequency_Hz: number) => (t: number) => Math.sin(2 * Math.PI * frequency_Hz * t);
/** A record that holds the whole interval after the tick, and what the meter needs to settle before it. */
const TEN_MINUTES = { duration_s: 661, start_s: -60 };

describe.each(CASES)('Pst = 1 for rectangular changes, %s', (key, lamp, mains_Hz) => {
	it.each(Object.entries(tables.pst[key]!.swing_pct))(
		'%s changes a minute of %s %%',
		(changes, swing_pct) => {
			const { intervals } = measure({
				lamp,
				mains_Hz,
				swing_pct,
				shape: square(Number(changes) / 120),
				...TEN_MINUTES
			});
			expect(intervals).toHaveLength(1);
			// The standard permits 5 %.
			expect(Math.abs(intervals[0]!.pst - 1)).toBeLessThan(0.006);
		}
	);
});

describe.each(CASES)('P_inst,max = 1, %s', (key, lamp, mains_Hz) => {
	const { sine: sineTable, rectangular } = tables.pInst[key]!;

	it('of sinusoidal modulation, within 1.5 % (8 % are permitted)', () => {
		for (const [frequency, swing_pct] of Object.entries(sineTable)) {
			const { pInstMax } = measure({
				lamp,
				mains_Hz,
				swing_pct,
				shape: sine(Number(frequency)),
				duration_s: 34
			});
			expect(Math.abs(pInstMax - 1), `${frequency} Hz`).toBeLessThan(0.015);
		}
	});

	it('of rectangular modulation, within 4 % (8 % are permitted; above 10 Hz it hangs on the phase of the mains)', () => {
		for (const frequency of ['0.5', '2', '5', '8.8', '12', '17', '22']) {
			const { pInstMax } = measure({
				lamp,
				mains_Hz,
				swing_pct: rectangular[frequency]!,
				shape: square(Number(frequency)),
				duration_s: 34,
				rate_Hz: 6400
			});
			expect(Math.abs(pInstMax - 1), `${frequency} Hz`).toBeLessThan(0.04);
		}
	});

	it('has the gain that an independent model of the same blocks needs', () => {
		const { gain } = designPerceptionFilters(2000, mains_Hz, lamp);
		expect(Math.abs(gain / tables.pInst[key]!.gain - 1)).toBeLessThan(1e-3);
	});
});

describe('the flickermeter', () => {
	const state = { lamp: '230 V', mains_Hz: 50, ...TEN_MINUTES } as const;

	it('is linear: testing states of IEC 62586-2 with Pst = 1 and 4 (from memory)', () => {
		const at = (changes: number, swing_pct: number) =>
			measure({ ...state, swing_pct, shape: square(changes / 120) }).intervals[0]!.pst;
		expect(Math.abs(at(39, 0.894) - 1)).toBeLessThan(0.05);
		expect(Math.abs(at(110, 4 * 0.722) - 4)).toBeLessThan(0.1);
	});

	it('gives the same at other sampling rates and block sizes, and with another mains frequency', () => {
		const wave = { ...state, swing_pct: 0.894, shape: square(39 / 120) };
		for (const other of [
			{ rate_Hz: 6400, block: 1000 },
			{ rate_Hz: 7680 },
			{ block: 37 },
			{ actual_Hz: 49.3 }
		]) {
			const { pst } = measure({ ...wave, ...other }).intervals[0]!;
			expect(Math.abs(pst - 1), JSON.stringify(other)).toBeLessThan(0.01);
		}
	});

	it('sees nothing in a steady distorted voltage, and nothing in its level', () => {
		const harmonics = (t: number) =>
			16 * Math.sin(2 * Math.PI * 250 * t + 1) + 9 * Math.sin(2 * Math.PI * 350 * t);
		const { intervals } = measure({ ...state, swing_pct: 0, shape: () => 0, harmonics });
		expect(intervals[0]!.pst).toBeLessThan(0.02);
	});

	it('gives no severity for an interval that it saw in part only', () => {
		const half = measure({ ...state, swing_pct: 1, shape: square(1), duration_s: 400, start_s: 0 });
		expect(half.intervals).toEqual([]);
		const settled = measure({ ...state, swing_pct: 1, shape: square(1), duration_s: 600, start_s: 0 });
		expect(settled.intervals).toHaveLength(1);
		expect(settled.intervals[0]!.measured_s).toBeLessThan(580);
		expect(settled.intervals[0]!.start_ms).toBe(TICK_MS);
	});

	it('takes missing samples for no data and settles anew', () => {
		const meter: FlickerInterval[] = [];
		const flickermeter = new Flickermeter({
			samplingRate_Hz: 2000,
			nominalFrequency_Hz: 50,
			lamp: '230 V',
			start_ms: TICK_MS,
			onInterval: (interval) => meter.push(interval)
		});
		const second = Float64Array.from({ length: 2000 }, (_, i) => Math.sin((2 * Math.PI * 50 * i) / 2000));
		for (let s = 0; s < 600; s++) flickermeter.push(s === 300 ? second.map(() => NaN) : second);
		flickermeter.finish();
		expect(meter).toEqual([]);
		expect(flickermeter.pInstMax).toBeLessThan(1e-3);
	});

	it('joins twelve Pst to Plt on even hours, by the cube', () => {
		// Derived from the definition in IEC 61000-4-15; the figure was computed elsewhere.
		const pst = [...Array(11).fill(0.5), 2];
		expect(longTermSeverity(pst)).toBeCloseTo(0.92100787466, 10);
		const twoHours_ms = 7_200_000;
		const intervals = pst.map((value: number, i) => ({ start_ms: twoHours_ms + i * 600_000, pst: value }));
		expect(longTermIntervals(intervals)).toEqual([{ start_ms: twoHours_ms, plt: longTermSeverity(pst) }]);
		expect(longTermIntervals(intervals.map((one) => ({ ...one, start_ms: one.start_ms + 600_000 })))).toEqual(
			[]
		);
	});
});
