import { describe, expect, it } from 'vitest';
import { crestFactor } from '$lib/harmonics/crest-factor';
import { tdd_pctOfDemandCurrent, thd_pctOfFundamental, thd_pctOfRms } from '$lib/harmonics/distortion';
import { wrapDegrees } from '$lib/harmonics/phasor';
import {
	lineToLineUnbalance_pct,
	sequenceComponents,
	unbalance
} from '$lib/harmonics/sequence/sequence-components';
import { rootMeanSquare } from '$lib/numerics/stats/root-mean-square';
import {
	samplePeriod,
	sixPulseCurrent,
	squareWave,
	trianglePulses,
	triangleWave
} from '$lib/synthesis/waveform-closed-forms';

function rowOf(values: Record<number, number>): Float64Array {
	const row = new Float64Array(51);
	for (const [order, value] of Object.entries(values)) row[Number(order)] = value;
	return row;
}

describe('THD and TDD', () => {
	// Hoevenaars, LeDoux, Colosino, IEEE PCIC 2003, paper 2003-15, table of measured currents, I_L = 936 A (from memory).
	it.each([
		[936, 35.57, 3.800213675, 3.800213675],
		[767, 32.21, 4.199478488, 3.441239316],
		[424, 21.2, 5.0, 2.264957265],
		[111, 13.32, 12.0, 1.423076923]
	])('%d A with %d A of harmonics: THD %d %, TDD %d %', (i1, ih, thd_pct, tdd_pct) => {
		const row = rowOf({ 1: i1, 5: ih });
		expect(Math.abs(thd_pctOfFundamental(row, i1, 50) - thd_pct)).toBeLessThan(1e-8);
		expect(Math.abs(tdd_pctOfDemandCurrent(row, 936, 50) - tdd_pct)).toBeLessThan(1e-8);
	});

	it('a spectrum of six-pulse converters has 21.46 % (IEEE Std 519-1992 typical values, from memory)', () => {
		const row = rowOf({ 1: 100, 5: 17.5, 7: 11, 11: 4.5, 13: 2.9, 17: 1.5, 19: 1, 23: 0.9, 25: 0.8 });
		expect(Math.abs(thd_pctOfFundamental(row, 100, 50) - 21.4618265765)).toBeLessThan(1e-9);
	});

	it('on the rms never reaches 100 %: equal parts of fundamental and harmonics give 1/√2 (definition)', () => {
		expect(thd_pctOfRms(100)).toBeCloseTo(100 / Math.SQRT2, 12);
		expect(thd_pctOfRms(1e9)).toBeLessThan(100 + 1e-9);
		expect(thd_pctOfRms(0)).toBe(0);
	});

	it('a missing order is no zero, a missing fundamental no division', () => {
		const row = rowOf({ 1: 100, 5: 10 });
		row[30] = NaN;
		expect(thd_pctOfFundamental(row, 100, 50)).toBeNaN();
		expect(thd_pctOfFundamental(row, 100, 25)).toBeCloseTo(10, 12);
		expect(thd_pctOfFundamental(rowOf({ 1: 0, 5: 1 }), 1, 25)).toBeNaN();
		expect(tdd_pctOfDemandCurrent(rowOf({ 1: 1 }), 0, 50)).toBeNaN();
	});
});

describe('crest factor', () => {
	// Ratios of peak to rms of the closed forms (mathematics). Blocks of 120° change half way between samples of the grid.
	it.each([
		['sine', Math.sin, Math.SQRT2],
		['half-wave rectified', (theta: number) => Math.max(0, Math.sin(theta)), 2],
		['square', squareWave, 1],
		['triangle', triangleWave, 1.73205080757],
		['six-pulse', sixPulseCurrent, 1.22474487139],
		['pulses of one twelfth', trianglePulses(1 / 12), 3]
	] as const)('of the %s wave is %d', (_, wave, expected) => {
		const samples = samplePeriod(wave, 120_000);
		const peak = Math.max(...Array.from({ length: 200 }, (_v, i) => Math.abs(samples[i * 600]!)));
		expect(Math.abs(crestFactor(peak, rootMeanSquare(samples)) / expected - 1)).toBeLessThan(3e-5);
	});

	it('has no value without a signal', () => {
		expect(crestFactor(0, 0)).toBeNaN();
	});
});

describe('symmetrical components', () => {
	const at = (rms: number, phase_deg: number) => ({ rms, phase_deg });

	it('open line (Grainger & Stevenson, Power System Analysis, example 11.1, from memory): 10/√3 at ∓30°', () => {
		const { zero, positive, negative } = sequenceComponents(at(10, 0), at(10, 180), at(0, 0));
		expect(zero.rms).toBeLessThan(1e-12);
		expect(Math.abs(positive.rms - 5.773502692)).toBeLessThan(1e-8);
		expect(Math.abs(positive.phase_deg + 30)).toBeLessThan(1e-9);
		expect(Math.abs(negative.phase_deg - 30)).toBeLessThan(1e-9);
	});

	it('blown fuse (Glover & Sarma, Power System Analysis and Design, from memory)', () => {
		const { zero, positive, negative } = sequenceComponents(at(10, 0), at(0, 0), at(10, 120));
		expect(Math.abs(zero.rms - 3.333333333)).toBeLessThan(1e-8);
		expect(Math.abs(zero.phase_deg - 60)).toBeLessThan(1e-9);
		expect(Math.abs(positive.rms - 6.666666667)).toBeLessThan(1e-8);
		expect(Math.abs(negative.phase_deg + 60)).toBeLessThan(1e-9);
	});

	it('100∠90°, 116∠0°, 71∠224.8° (university textbook companion, ch. 21)', () => {
		const { zero, positive, negative } = sequenceComponents(at(100, 90), at(116, 0), at(71, 224.8));
		expect(Math.abs(zero.rms - 27.49372665)).toBeLessThan(1e-7);
		expect(Math.abs(positive.rms - 93.22221551)).toBeLessThan(1e-7);
		expect(Math.abs(positive.phase_deg - 105.7976463)).toBeLessThan(1e-6);
		expect(Math.abs(negative.rms - 7.260408397)).toBeLessThan(1e-7);
	});

	// IEC 62586-2 testing states 2 and 3, phase magnitudes in percent at 120° (from memory): u2 = u0 = 5.05 % and 4.95 %.
	it.each([
		[[73, 80, 87], 5.051814855],
		[[152, 140, 128], 4.948716593]
	])('testing state %j has u2 = u0 = %d %', (magnitudes, expected) => {
		const [a, b, c] = magnitudes.map((rms, i) => at(rms, -120 * i)) as [never, never, never];
		const { u2_pct, u0_pct } = unbalance(sequenceComponents(a, b, c));
		expect(Math.abs(u2_pct - expected)).toBeLessThan(1e-8);
		expect(Math.abs(u0_pct - expected)).toBeLessThan(1e-8);
	});

	it('line-to-line magnitudes alone give the same u2 (IEC 61000-4-30, 5.7.1)', () => {
		expect(
			Math.abs(lineToLineUnbalance_pct(132.5481045, 144.6685868, 138.7407655) - 5.051814855)
		).toBeLessThan(1e-6);
		expect(lineToLineUnbalance_pct(10, 1, 1)).toBeNaN();
	});

	it('angles stay within (−180°, 180°]', () => {
		expect([wrapDegrees(540), wrapDegrees(-180), wrapDegrees(181), wrapDegrees(-90)]).toEqual([
			180, 180, -179, -90
		]);
	});
});
