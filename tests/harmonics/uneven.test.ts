import { describe, expect, it } from 'vitest';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { isUnevenlySampled } from '$lib/harmonics/engine/stretches';
import { MAX_ORDER, ORDER_STRIDE } from '$lib/harmonics/intervals';
import { wrapDegrees } from '$lib/harmonics/phasor';
import { analyseUneven } from '$lib/harmonics/uneven/analyse-uneven';
import { faithfulOrders } from '$lib/harmonics/uneven/faithful-order';
import { unevenStretches } from '$lib/harmonics/uneven/uneven-stretches';
import type { ChannelMapping, WaveformAnalysis } from '$lib/harmonics/waveform-analysis';
import type { Recording } from '$lib/recording/recording';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { seededRandom } from '$lib/synthesis/waveform-random';

const TWO_PI = 2 * Math.PI;

interface Tone {
	order: number;
	/** rms */
	value: number;
	/** degrees, cosine convention at t = 0, of this order itself */
	phase_deg: number;
}

const VOLTAGE: Tone[] = [
	{ order: 1, value: 230, phase_deg: 20 },
	{ order: 3, value: 11.5, phase_deg: -50 },
	{ order: 5, value: 13.8, phase_deg: 170 },
	{ order: 11, value: 6.9, phase_deg: 33 },
	{ order: 25, value: 3.45, phase_deg: -121 },
	{ order: 50, value: 2.3, phase_deg: 80 }
];
const CURRENT: Tone[] = [
	{ order: 1, value: 40, phase_deg: -5 },
	{ order: 5, value: 8, phase_deg: 100 },
	{ order: 7, value: 4, phase_deg: 10 }
];

const valueAt = (tones: readonly Tone[], frequency_Hz: number, t: number) =>
	tones.reduce(
		(sum, { order, value, phase_deg }) =>
			sum + Math.SQRT2 * value * Math.cos(TWO_PI * order * frequency_Hz * t + (phase_deg * Math.PI) / 180),
		0
	);

/** Instants about `step_s` apart, each step between (1 − spread) and (1 + spread) of it. */
function jittered(step_s: number, spread: number, duration_s: number, seed = 1): Float64Array {
	const random = seededRandom(seed);
	const stamps: number[] = [];
	for (let t = 0; t < duration_s; t += step_s * (1 + spread * (2 * random.uniform() - 1))) stamps.push(t);
	return Float64Array.from(stamps);
}

function record(stamps_s: Float64Array, waves: readonly ((t: number) => number)[]): Recording {
	const even = synthesiseRecording({
		frequency_Hz: 50,
		samplingRate_Hz: 1000,
		duration_s: 0.01,
		seed: 1,
		channels: waves.map((_, c) => ({
			name: c === 0 ? 'U1' : `I${c}`,
			quantity: c === 0 ? 'voltage' : 'current',
			phase: 'L1',
			fundamental_rms: 1,
			fundamentalPhase_deg: 0,
			harmonics: []
		}))
	});
	return {
		...even,
		sampleCount: stamps_s.length,
		segments: [],
		timeStamps_s: stamps_s,
		channels: even.channels.map((channel, c) => ({ ...channel, samples: stamps_s.map(waves[c]!) }))
	};
}

const MAPPINGS: ChannelMapping[] = [
	{ channelIndex: 0, quantity: 'voltage', phase: 'L1', toPrimary: 1 },
	{ channelIndex: 1, quantity: 'current', phase: 'L1', toPrimary: 1 }
];

function analysed(recording: Recording, mappings = MAPPINGS, start_ms?: number): WaveformAnalysis {
	const outcome = analyseUneven(recording, mappings, {
		nominalFrequency_Hz: null,
		nominalVoltages_V: { L1: 230 },
		...(start_ms === undefined ? {} : { start_ms })
	});
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	return outcome.value;
}

const cell = (rows: Float64Array, window: number, order: number) => rows[window * ORDER_STRIDE + order]!;

describe('captures with time stamps and no even rate', () => {
	it('tones at about 100 kS/s with steps of 5 to 15 µs: levels within the loss that is stated, phases within 0.01° to 0.1°', () => {
		const f = 49.37;
		const stamps_s = jittered(1e-5, 0.5, 1.05);
		const recording = record(stamps_s, [(t) => valueAt(VOLTAGE, f, t) + 3, (t) => valueAt(CURRENT, f, t)]);
		expect(isUnevenlySampled(recording)).toBe(true);
		const analysis = analysed(recording);
		expect(analysis.windowCount).toBe(5);
		expect(analysis.cyclesPerWindow).toBe(10);
		expect(analysis.highestOrder).toBe(MAX_ORDER);
		const [voltage, current] = analysis.channels;
		for (let w = 0; w < 5; w++) {
			expect(Math.abs(analysis.frequency_Hz[w]! - f)).toBeLessThan(2e-5);
			expect(Math.abs(analysis.windowLengths_s[w]! - 10 / f)).toBeLessThan(1e-6);
			for (const [channel, tones] of [
				[voltage!, VOLTAGE],
				[current!, CURRENT]
			] as const) {
				for (const { order, value, phase_deg } of tones) {
					// A tone whose samples are joined by lines keeps the mean of sinc² over the steps: 1 − (πhfΔ)²·(1 + s²)/3.
					const lost = ((Math.PI * order * f * 1e-5) ** 2 * (1 + 0.25)) / 3;
					const measured = cell(channel.components, w, order);
					expect(Math.abs(measured / (value * (1 - lost)) - 1)).toBeLessThan(5e-5 + lost / 20);
					const expected_deg = phase_deg - order * VOLTAGE[0]!.phase_deg;
					const off_deg = wrapDegrees(cell(channel.phases_deg, w, order) - expected_deg);
					expect(Math.abs(off_deg)).toBeLessThan(0.01 + (0.09 * order) / 50);
				}
				for (const order of [2, 4, 9, 33, 48]) {
					expect(cell(channel.components, w, order)).toBeLessThan(1e-4 * tones[0]!.value);
				}
			}
			expect(voltage!.dc[w]).toBeCloseTo(3, 2);
			const rms = Math.hypot(3, ...VOLTAGE.map((tone) => tone.value));
			expect(Math.abs(voltage!.rms[w]! / rms - 1)).toBeLessThan(1e-4);
			const P_W = 230 * 40 * Math.cos((25 * Math.PI) / 180) + 13.8 * 8 * Math.cos((70 * Math.PI) / 180);
			expect(Math.abs(analysis.powers[0]!.activePower_W[w]! / P_W - 1)).toBeLessThan(1e-4);
		}
		expect(analysis.quality.map((remark) => remark.code)).toContain('uneven-sampling');
		expect(analysis.quality.map((remark) => remark.code)).not.toContain('rate-too-low');
		expect([...analysis.flagged]).toEqual([0, 0, 0, 0, 0]);
	});

	it('a triangle sampled anywhere, corners included, is exact: a_n = 8/(π²n²), n odd (Zwillinger, CRC tables)', () => {
		const f = 50;
		const amplitude = 325;
		const triangle = (t: number) => amplitude * (1 - 4 * Math.abs(f * t - Math.floor(f * t) - 0.5));
		const corners: number[] = [];
		for (let i = 0; i <= 60; i++) corners.push(i / (2 * f));
		const stamps_s = Float64Array.from(
			[...jittered(2e-5, 0.8, 0.6), ...corners].sort((a, b) => a - b)
		).filter((t, i, all) => i === 0 || t > all[i - 1]!);
		const { windowCount, channels } = analysed(record(stamps_s, [triangle]), MAPPINGS.slice(0, 1));
		expect(windowCount).toBeGreaterThanOrEqual(2);
		for (let w = 0; w < windowCount; w++) {
			for (let n = 1; n <= 49; n++) {
				const peak = n % 2 === 1 ? (8 * amplitude) / (Math.PI * n) ** 2 : 0;
				// The window follows the measured frequency, which is the true one to 1e-9.
				expect(Math.abs(cell(channels[0]!.components, w, n) - peak / Math.SQRT2)).toBeLessThan(
					1e-6 * amplitude
				);
			}
			expect(Math.abs(channels[0]!.rms[w]! - amplitude / Math.sqrt(3))).toBeLessThan(1e-7 * amplitude);
		}
	});

	it('agrees with the even engine within sinc² of evenly spaced samples, and gives no order that loses more than 5 %', () => {
		const f = 50.02;
		const rate = 12_800;
		const step_s = 1 / rate;
		const count = 8000;
		const recording = synthesiseRecording({
			frequency_Hz: f,
			samplingRate_Hz: rate,
			duration_s: count * step_s,
			seed: 1,
			channels: [
				{
					name: 'U1',
					quantity: 'voltage',
					phase: 'L1',
					fundamental_rms: 230,
					fundamentalPhase_deg: 12,
					harmonics: [5, 7, 11, 25, 29].map((order) => ({
						order,
						magnitude_pctOfFundamental: 40 / order,
						phase_deg: order
					}))
				}
			]
		});
		const mappings = MAPPINGS.slice(0, 1);
		const even = analyseWaveform(recording, mappings, { nominalFrequency_Hz: 50 });
		if (!even.ok) throw new Error(even.problem.sentence);
		const stamped: Recording = {
			...recording,
			segments: [],
			timeStamps_s: Float64Array.from({ length: count }, (_, i) => i * step_s)
		};
		const joined = analysed(stamped, mappings);
		// sinc²(x) = 0.95 at x = 0.1245 (from the series 1 − (πx)²/3 + 2(πx)⁴/45): 31.9 orders, so the line above order 31 is in and that above 32 is not.
		expect(joined.highestOrder).toBe(31);
		for (const order of [1, 5, 7, 11, 25, 29]) {
			const x = Math.PI * order * f * step_s;
			const share = (Math.sin(x) / x) ** 2;
			const ratio =
				cell(joined.channels[0]!.components, 0, order) / cell(even.value.channels[0]!.components, 0, order);
			expect(Math.abs(ratio / share - 1)).toBeLessThan(2e-5);
			expect(
				Math.abs(
					wrapDegrees(
						cell(joined.channels[0]!.phases_deg, 0, order) -
							cell(even.value.channels[0]!.phases_deg, 0, order)
					)
				)
			).toBeLessThan(0.01);
			expect(share).toBeGreaterThan(0.95);
		}
		expect(cell(joined.channels[0]!.components, 0, 32)).toBeNaN();
		expect(cell(joined.channels[0]!.groups, 0, 31)).toBeNaN();
		const remark = joined.quality.find(({ code }) => code === 'uneven-sampling')!;
		expect(remark.sentence).toContain('of order 31, the highest given');
	});

	it('no window spans a gap, missing samples leave their windows without data, and dips are flagged', () => {
		const f = 50;
		const wave = (t: number) => valueAt([VOLTAGE[0]!], f, t) * (t > 1.5 && t < 1.56 ? 0.5 : 1);
		const stamps_s = jittered(2e-5, 0.4, 2).filter((t) => t < 0.65 || t > 0.6503);
		const recording = record(stamps_s, [wave, (t) => valueAt(CURRENT, f, t)]);
		const lost = stamps_s.findIndex((t) => t > 0.3);
		recording.channels[1]!.samples[lost] = NaN;
		const analysis = analysed(recording);
		const ends = [...analysis.windowStarts_s].map((start, w) => start + analysis.windowLengths_s[w]!);
		expect(analysis.windowCount).toBe(9);
		[...analysis.windowStarts_s].forEach((start, w) => {
			expect(start > 0.65 || ends[w]! < 0.6501).toBe(true);
			const holdsLost = start <= 0.3 && ends[w]! > 0.3001;
			expect(Number.isNaN(analysis.channels[1]!.rms[w]!)).toBe(holdsLost);
			expect(Number.isNaN(analysis.powers[0]!.activePower_W[w]!)).toBe(holdsLost);
			expect(analysis.channels[0]!.rms[w]).toBeGreaterThan(100);
			// A value of Urms(1/2) belongs to the window that its cycle starts in.
			expect(analysis.flagged[w] === 1).toBe(start < 1.56 && ends[w]! > 1.48);
		});
		const codes = analysis.quality.map((remark) => remark.code);
		expect(codes).toEqual(expect.arrayContaining(['gaps-between-samples', 'missing-samples', 'dip']));
		const missing = analysis.quality.find(({ code }) => code === 'missing-samples')!;
		expect(missing.sentence).toMatch(/^I1: 1 of \d+ samples are missing; 1 windows/);
	});

	it('starts the train of windows anew at a ten-minute tick', () => {
		const stamps_s = jittered(5e-5, 0.3, 1.3);
		const recording = record(stamps_s, [(t) => valueAt([VOLTAGE[0]!], 50, t)]);
		const analysis = analysed(recording, MAPPINGS.slice(0, 1), 600_000 - 500);
		const first = [...analysis.resync].indexOf(1);
		expect(analysis.windowStarts_s[first]).toBeCloseTo(0.5, 6);
	});

	it('says what it lacks', () => {
		const wave = (t: number) => valueAt(VOLTAGE, 60, t);
		const outcome = (stamps_s: Float64Array, mappings = MAPPINGS.slice(0, 1)) => {
			const result = analyseUneven(record(stamps_s, [wave]), mappings, { nominalFrequency_Hz: 60 });
			return result.ok ? null : result.problem;
		};
		expect(outcome(jittered(2e-5, 0.4, 0.16))).toMatchObject({
			code: 'record-too-short',
			sentence: expect.stringContaining('one window of 12 cycles of 60.0')
		});
		expect(outcome(jittered(3e-3, 0.2, 3))).toMatchObject({ code: 'rate-too-low' });
		expect(outcome(Float64Array.of(0, 1e-4, 1e-4, 2e-4))).toMatchObject({ code: 'rate-not-known' });
		expect(outcome(new Float64Array(0))).toMatchObject({ code: 'rate-not-known' });
		expect(outcome(jittered(2e-5, 0.4, 1), [])).toMatchObject({ code: 'no-mapped-channels' });
	});
});

describe('instants', () => {
	it('are parted where a step is more than five times the median', () => {
		const result = unevenStretches(Float64Array.of(10, 11, 12, 13, 18, 19, 20.5, 25.6, 26, 27, 28));
		if (!result.ok) throw new Error(result.problem.sentence);
		expect(result.value.list).toEqual(
			[
				{ samplingRate_Hz: 6 / 10.5, fromSample: 0, toSample: 7, offset_s: 0 },
				{ samplingRate_Hz: 3 / 2.4, fromSample: 7, toSample: 11, offset_s: 15.6 }
			].map((stretch) => ({
				...stretch,
				samplingRate_Hz: expect.closeTo(stretch.samplingRate_Hz, 12),
				offset_s: expect.closeTo(stretch.offset_s, 12)
			}))
		);
		expect(result.value.steps).toEqual({
			median_s: 1,
			shortest_s: expect.closeTo(0.4, 12),
			longest_s: 5,
			gaps: 1
		});
	});

	it('carry as many orders as their poorest window does', () => {
		const fine = Float64Array.from({ length: 20_000 }, (_, i) => i * 2e-5);
		expect(faithfulOrders(fine, 50, 10).highest).toBe(MAX_ORDER + 1);
		const coarse = fine.filter((t, i) => t > 0.2 || i % 4 === 0);
		// Steps of 80 µs: 0.1245/(50·80e-6) = 31.1, which is the line above order 31.
		const { highest, leastOfHighest, leastOfFundamental } = faithfulOrders(coarse, 50, 10);
		expect(highest).toBe(31);
		expect(leastOfHighest).toBeCloseTo((Math.sin(0.124 * Math.PI) / (0.124 * Math.PI)) ** 2, 4);
		expect(leastOfFundamental).toBeCloseTo(1 - (Math.PI * 0.004) ** 2 / 3, 6);
	});
});
