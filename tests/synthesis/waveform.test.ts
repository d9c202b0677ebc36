import { describe, expect, it } from 'vitest';
import { synthesiseWaveform, type ChannelTruth, type WaveformTruth } from '$lib/synthesis/waveform';
import { seededRandom } from '$lib/synthesis/waveform-random';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';

const CHANNEL: ChannelTruth = {
	name: 'U1',
	quantity: 'voltage',
	phase: 'L1',
	fundamental_rms: 230,
	fundamentalPhase_deg: 30,
	harmonics: [{ order: 5, magnitude_pctOfFundamental: 10, phase_deg: 60 }]
};

function make(channel: Partial<ChannelTruth> = {}, truth: Partial<WaveformTruth> = {}): Float64Array {
	return synthesiseWaveform({
		frequency_Hz: 50,
		samplingRate_Hz: 10000,
		duration_s: 0.4,
		seed: 9,
		...truth,
		channels: [{ ...CHANNEL, ...channel }]
	})[0]!;
}

const deviation = (values: Float64Array) => {
	const mean = values.reduce((sum, v) => sum + v, 0) / values.length;
	return Math.sqrt(values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / values.length);
};

describe('the signal generator', () => {
	it('places each order by its own angle: φ_h = h·φ_1 + the stated one', () => {
		const samples = make();
		const rad = Math.PI / 180;
		for (const n of [0, 1, 137, 3999]) {
			const turn = 2 * Math.PI * 50 * (n / 10000);
			const expected =
				230 * Math.SQRT2 * (Math.cos(turn + 30 * rad) + 0.1 * Math.cos(5 * turn + (150 + 60) * rad));
			expect(Math.abs(samples[n]! - expected)).toBeLessThan(1e-9);
		}
	});

	it('repeats itself from the seed and differs with another', () => {
		const noisy = { noise_pctOfFundamental: 1 };
		expect(make(noisy)).toEqual(make(noisy));
		expect(make(noisy)).not.toEqual(make(noisy, { seed: 10 }));
	});

	it('adds noise of the stated deviation, dc, and nothing else', () => {
		const clean = make();
		const noisy = make({ noise_pctOfFundamental: 2, dc: 7 });
		const difference = noisy.map((v, n) => v - clean[n]!);
		// 4000 samples: the deviation is known within 1.1 % (one sigma); five sigmas are allowed.
		expect(Math.abs(deviation(difference) / 4.6 - 1)).toBeLessThan(0.056);
		expect(Math.abs(difference.reduce((s, v) => s + v, 0) / 4000 - 7)).toBeLessThan(0.4);
	});

	it('rounds to steps and cuts off at full scale', () => {
		const samples = make({ quantisation: { bits: 8, fullScale: 256 } });
		expect(Math.max(...samples)).toBe(254);
		expect(Math.min(...samples)).toBe(-256);
		expect(samples.every((v) => Number.isInteger(v / 2))).toBe(true);
	});

	it('shapes events and modulation in time', () => {
		const plain = make();
		const dip = make({ events: [{ from_s: 0.1, to_s: 0.2, factor: 0.6 }] });
		expect(dip[999]).toBe(plain[999]);
		expect(dip[1000]).toBeCloseTo(0.6 * plain[1000]!, 12);
		expect(dip[2000]).toBe(plain[2000]);
		const modulated = make({ modulation: { frequency_Hz: 10, depth_pct: 5 } });
		expect(modulated[500]! / plain[500]!).toBeCloseTo(0.95, 12);
	});

	it('adds the stated interharmonic', () => {
		const with65 = make({
			interharmonics: [{ frequency_Hz: 65, magnitude_pctOfFundamental: 3, phase_deg: 90 }]
		});
		const plain = make();
		const expected = 230 * Math.SQRT2 * 0.03 * Math.cos((2 * Math.PI * 65 * 77) / 10000 + Math.PI / 2);
		expect(with65[77]! - plain[77]!).toBeCloseTo(expected, 9);
	});

	it('makes the neutral the sum of the three line currents', () => {
		const channels = threePhaseChannels({
			voltage_V: 230,
			voltageHarmonics: [],
			current_A: 50,
			currentHarmonics: [{ order: 3, magnitude_pctOfFundamental: 40, phase_deg: 25 }],
			lag_deg: 15,
			currentFactors: [1, 0.8, 1.1],
			withNeutral: true
		});
		const all = synthesiseWaveform({
			frequency_Hz: 60,
			samplingRate_Hz: 7680,
			duration_s: 0.1,
			seed: 1,
			channels
		});
		for (let n = 0; n < 768; n++) {
			expect(Math.abs(all[6]![n]! - all[3]![n]! - all[4]![n]! - all[5]![n]!)).toBeLessThan(1e-9);
		}
	});

	it('draws evenly and normally', () => {
		const random = seededRandom(42);
		const uniform = Float64Array.from({ length: 20000 }, () => random.uniform());
		const normal = Float64Array.from({ length: 20000 }, () => random.normal());
		// Deviations 1/√12 and 1, known within 0.3 % and 0.5 % (one sigma).
		expect(Math.abs(deviation(uniform) * Math.sqrt(12) - 1)).toBeLessThan(0.015);
		expect(Math.abs(deviation(normal) - 1)).toBeLessThan(0.025);
		expect(Math.min(...uniform)).toBeGreaterThanOrEqual(0);
		expect(Math.max(...uniform)).toBeLessThan(1);
	});
});
