import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { designPerceptionFilters, type Lamp } from '$lib/harmonics/flicker/perception-filters';
import {
	changesPerMinute,
	measureFlicker,
	rectangular,
	sinusoidal,
	TEN_MINUTES
} from '../harmonics/modulated-voltage';

type PerLamp<T> = Record<Lamp, T>;
/** Tables of IEC 61000-4-15:2010; source and status words are in the file. */
interface Tables {
	pInst: Record<string, { sine: Record<string, number>; rectangular: Record<string, number>; gain: number }>;
	pst: Record<string, { swing_pct: Record<string, number> }>;
	further: {
		linePairs: { spacing_Hz: number; share_pct: PerLamp<number> };
		distortedCarrier: {
			shares_pct: Record<string, number>;
			phase_deg: number;
			modulation_Hz: number;
			swing_pct: PerLamp<number>;
		};
		frequencyAndLevel: { deviation_Hz: number; levels_V: PerLamp<[number, number]>; every_s: number };
		phaseJumps: { at_min: number[]; signs: number[]; pst: Record<string, Record<string, number>> };
	};
}
const tables: Tables = JSON.parse(readFileSync(new URL('./flicker.json', import.meta.url), 'utf8'));
const { linePairs, distortedCarrier, frequencyAndLevel, phaseJumps } = tables.further;
const CASES = [
	['230V-50', '230 V', 50],
	['120V-60', '120 V', 60],
	['120V-50', '120 V', 50],
	['230V-60', '230 V', 60]
] as const;
/** Long enough for the meter to settle and to meet the greatest value. */
const SHORT = { duration_s: 40, start_s: 0 };
const turn = 2 * Math.PI;

describe.each(CASES)('Pst = 1 for rectangular changes, %s', (key, lamp, mains_Hz) => {
	it.each(Object.entries(tables.pst[key]!.swing_pct))(
		'%s changes a minute of %s %% (5 %% are permitted)',
		(changes, swing_pct) => {
			const envelope = changesPerMinute(Number(changes), swing_pct);
			const { intervals } = measureFlicker({ lamp, mains_Hz, envelope, ...TEN_MINUTES });
			const whole = intervals.filter(({ pst }) => !Number.isNaN(pst));
			expect(whole).toHaveLength(1);
			expect(Math.abs(whole[0]!.pst - 1)).toBeLessThan(0.0025);
		}
	);
});

describe.each(CASES)('P_inst,max = 1, %s', (key, lamp, mains_Hz) => {
	const { sine, rectangular: rectangularTable, gain } = tables.pInst[key]!;

	it('of sinusoidal modulation (8 % are permitted)', () => {
		for (const [frequency, swing_pct] of Object.entries(sine)) {
			const envelope = sinusoidal(Number(frequency), swing_pct);
			const { pInstMax } = measureFlicker({ lamp, mains_Hz, envelope, ...SHORT });
			// The table is that of a small modulation: a slow one has to be large, and the scaling follows it in part.
			const permitted = Number(frequency) < 1 ? 0.01 : 0.004;
			expect(Math.abs(pInstMax - 1), `${frequency} Hz`).toBeLessThan(permitted);
		}
	});

	it('of rectangular modulation (8 % are permitted)', () => {
		for (const [frequency, swing_pct] of Object.entries(rectangularTable)) {
			const envelope = rectangular(Number(frequency), swing_pct);
			const { pInstMax } = measureFlicker({ lamp, mains_Hz, envelope, rate_Hz: 6400, ...SHORT });
			// Above 10 Hz it hangs on the phase of the mains when the level changes.
			expect(Math.abs(pInstMax - 1), `${frequency} Hz`).toBeLessThan(0.01);
		}
	});

	it('has the gain that an independent model of the same blocks needs', () => {
		expect(Math.abs(designPerceptionFilters(2000, mains_Hz, lamp).gain / gain - 1)).toBeLessThan(1e-3);
	});

	it('of two lines 10 Hz apart, wherever the sampling rate carries them', () => {
		const share = linePairs.share_pct[lamp] / 100;
		for (const line_Hz of [150, 250, 450, 950, 2050, 5950]) {
			const carrier = (t: number) =>
				Math.sin(turn * mains_Hz * t) +
				share * (Math.sin(turn * line_Hz * t) + Math.sin(turn * (line_Hz - linePairs.spacing_Hz) * t));
			const { pInstMax } = measureFlicker({ lamp, mains_Hz, carrier, rate_Hz: 12_800, ...SHORT });
			// The lines raise the rms that the input is scaled by.
			expect(Math.abs(pInstMax * (1 + 2 * share ** 2) ** 2 - 1), `${line_Hz} Hz`).toBeLessThan(0.005);
		}
	});

	it('of a distorted voltage that crosses zero several times', () => {
		const { modulation_Hz, phase_deg, shares_pct } = distortedCarrier;
		const lines = Object.entries(shares_pct).map(([order, pct]) => [Number(order), pct / 100] as const);
		const carrier = (t: number) =>
			lines.reduce(
				(sum, [order, share]) =>
					sum + share * Math.sin(turn * mains_Hz * order * t + (phase_deg * Math.PI) / 180),
				Math.sin(turn * mains_Hz * t)
			);
		const envelope = sinusoidal(modulation_Hz, distortedCarrier.swing_pct[lamp]);
		const { pInstMax } = measureFlicker({ lamp, mains_Hz, carrier, envelope, rate_Hz: 6400, ...SHORT });
		expect(Math.abs(pInstMax - 1)).toBeLessThan(0.003);
	});

	it('of a level and a frequency that change together', () => {
		const { deviation_Hz, every_s, levels_V } = frequencyAndLevel;
		const [high, low] = levels_V[lamp];
		const isLow = (t: number) => t % (2 * every_s) < every_s;
		// Cycles so far: the mains and the swing to either side, which comes back to nothing every second change.
		const cycles = (t: number) => {
			const within = t % (2 * every_s);
			return mains_Hz * t + deviation_Hz * (within < every_s ? within : 2 * every_s - within);
		};
		const { pInstMax } = measureFlicker({
			lamp,
			mains_Hz,
			carrier: (t) => Math.sin(turn * cycles(t)),
			envelope: (t) => (isLow(t) ? low / high : 1),
			duration_s: 60,
			start_s: 0,
			rate_Hz: 6400
		});
		expect(Math.abs(pInstMax - 1)).toBeLessThan(0.04);
	});
});

describe.each(CASES)('Pst of phase jumps, %s', (key, lamp, mains_Hz) => {
	it.each(Object.entries(phaseJumps.pst[key]!))('of %s° (5 %% are permitted)', (jump_deg, expected) => {
		const phase_deg = (t: number) =>
			phaseJumps.at_min.reduce(
				(sum, minute, i) => sum + (t + TEN_MINUTES.start_s >= 60 * minute - 1e-9 ? phaseJumps.signs[i]! : 0),
				0
			) * Number(jump_deg);
		const { intervals } = measureFlicker({
			lamp,
			mains_Hz,
			carrier: (t) => Math.sin(turn * mains_Hz * t + (phase_deg(t) * Math.PI) / 180),
			...TEN_MINUTES,
			// A jump has a spectrum without end, and between two samples it has no place.
			rate_Hz: 6400
		});
		const [whole] = intervals.filter(({ pst }) => !Number.isNaN(pst));
		expect(Math.abs(whole!.pst / expected - 1)).toBeLessThan(0.025);
	});
});
