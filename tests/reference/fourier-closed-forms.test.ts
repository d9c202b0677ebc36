import { describe, expect, it } from 'vitest';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { ORDER_STRIDE } from '$lib/harmonics/intervals';
import { executeRealDft, planRealDft } from '$lib/numerics/dft/real-dft';
import { readLineRms } from '$lib/numerics/dft/spectral-lines';
import { rootMeanSquare } from '$lib/numerics/stats/root-mean-square';
import {
	type ClosedForm,
	parabolaWave,
	samplePeriod,
	sawtoothWave,
	sixPulseCurrent,
	sixPulseCurrentWithOverlap,
	squareWave,
	trianglePulses,
	triangleWave
} from '$lib/synthesis/waveform-closed-forms';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { SERIES } from './fourier-values';

const radians = (degrees: number) => (degrees * Math.PI) / 180;

const WAVES: [string, ClosedForm][] = [
	['square', squareWave],
	['sawtooth', sawtoothWave],
	['triangle', triangleWave],
	['trianglePulses8', trianglePulses(1 / 8)],
	['trianglePulses24', trianglePulses(1 / 24)],
	['parabola', parabolaWave],
	['sixPulse', sixPulseCurrent],
	['sixPulseOverlap0_20', sixPulseCurrentWithOverlap(0, radians(20))],
	['sixPulseOverlap30_10', sixPulseCurrentWithOverlap(radians(30), radians(10))]
];

// Orders above half the points fold back. A wave with steps, sampled with its mid values, is off by the factor
// 1 − (πn/N)²/3 at order n: 5e-7 of the order's own value at n = 25, N = 65 536. Corners that fall between
// samples (pulses, blocks of 120°) move by at most half a spacing: below 3e-5 of the fundamental.
const POINTS = 65536;
const FOLDING = 3e-5;

describe.each(WAVES)('%s against its published series', (name, wave) => {
	const reference = SERIES[name]!;
	const fundamental = reference.amplitudes[0]!;

	it(`DFT of one sampled period gives orders 1 … 25, dc and rms (${reference.source})`, () => {
		const samples = samplePeriod(wave, POINTS);
		const plan = planRealDft(POINTS);
		executeRealDft(plan, samples);
		const lines = new Float64Array(26);
		readLineRms(plan, lines, 26);
		expect(Math.abs(lines[0]! - Math.abs(reference.dc))).toBeLessThan(FOLDING * fundamental);
		expect(Math.abs(rootMeanSquare(samples) - reference.rms)).toBeLessThan(FOLDING * fundamental);
		reference.amplitudes.forEach((amplitude, i) => {
			expect(Math.abs(lines[i + 1]! * Math.SQRT2 - amplitude)).toBeLessThan(FOLDING * fundamental);
		});
	});

	it('the whole analyser gives the same percentages from an unsynchronised capture', () => {
		const recording = synthesiseRecording({
			frequency_Hz: 49.73,
			samplingRate_Hz: 12800,
			duration_s: 1,
			seed: 1,
			channels: [
				{
					name: 'I',
					quantity: 'current',
					phase: 'L1',
					fundamental_rms: fundamental / Math.SQRT2,
					fundamentalPhase_deg: 17,
					dc: reference.dc,
					harmonics: reference.amplitudes.slice(1).map((amplitude, i) => ({
						order: i + 2,
						magnitude_pctOfFundamental: (100 * amplitude) / fundamental,
						phase_deg: 31 * i
					}))
				}
			]
		});
		const outcome = analyseWaveform(
			recording,
			[{ channelIndex: 0, quantity: 'current', phase: 'L1', toPrimary: 1 }],
			{ nominalFrequency_Hz: 50 }
		);
		if (!outcome.ok) throw new Error(outcome.problem.sentence);
		const channel = outcome.value.channels[0]!;
		const last = outcome.value.windowCount - 1;
		for (const w of [0, last]) {
			const one = channel.subgroups[w * ORDER_STRIDE + 1]!;
			reference.amplitudes.forEach((amplitude, i) => {
				const measured_pct = (100 * channel.subgroups[w * ORDER_STRIDE + i + 1]!) / one;
				// 0.001 % of the fundamental is what the engine promises.
				expect(Math.abs(measured_pct - (100 * amplitude) / fundamental)).toBeLessThan(1e-3);
			});
			const toOrder25_pct = (100 * Math.hypot(...reference.amplitudes.slice(1))) / fundamental;
			expect(Math.abs(channel.thd_pctOfFundamental[w]! - toOrder25_pct)).toBeLessThan(2e-3);
		}
	});
});

describe('distortion over all orders', () => {
	it.each(WAVES)(
		'%s: √(rms² − dc² − U1²)/U1 of the sampled wave is the published closed form',
		(name, wave) => {
			const reference = SERIES[name]!;
			const samples = samplePeriod(wave, POINTS);
			const plan = planRealDft(POINTS);
			executeRealDft(plan, samples);
			const lines = new Float64Array(2);
			readLineRms(plan, lines, 2);
			const content = Math.sqrt(rootMeanSquare(samples) ** 2 - lines[0]! ** 2 - lines[1]! ** 2);
			expect(Math.abs((100 * content) / lines[1]! - reference.thdAllOrders_pct)).toBeLessThan(0.02);
		}
	);
});
