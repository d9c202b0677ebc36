import { describe, expect, it } from 'vitest';
import { analyseWaveform, analyseWaveformSteps, type AnalysisOptions } from '$lib/harmonics/analyse-waveform';
import { ORDER_STRIDE } from '$lib/harmonics/intervals';
import { wrapDegrees } from '$lib/harmonics/phasor';
import { nominalVoltagesByPhase_V } from '$lib/harmonics/nominal-voltages';
import type { ChannelMapping } from '$lib/harmonics/waveform-analysis';
import type { Recording } from '$lib/recording/recording';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';
import type { WaveformTruth } from '$lib/synthesis/waveform';

const VOLTAGE_HARMONICS = [
	{ order: 5, magnitude_pctOfFundamental: 3, phase_deg: 40 },
	{ order: 7, magnitude_pctOfFundamental: 2, phase_deg: -70 }
];
const CURRENT_HARMONICS = [
	{ order: 3, magnitude_pctOfFundamental: 12, phase_deg: 10 },
	{ order: 5, magnitude_pctOfFundamental: 20, phase_deg: 180 },
	{ order: 7, magnitude_pctOfFundamental: 14, phase_deg: -30 }
];

function point(overrides: Partial<WaveformTruth> = {}): WaveformTruth {
	return {
		frequency_Hz: 50.03,
		samplingRate_Hz: 12800,
		duration_s: 2,
		seed: 11,
		channels: threePhaseChannels({
			voltage_V: 230,
			voltageHarmonics: VOLTAGE_HARMONICS,
			current_A: 100,
			currentHarmonics: CURRENT_HARMONICS,
			lag_deg: 20,
			withNeutral: true
		}),
		...overrides
	};
}

function mapAll(recording: Recording): ChannelMapping[] {
	return recording.channels.map((channel) => ({
		channelIndex: channel.index,
		quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
		phase: channel.phaseHint!,
		toPrimary: 1
	}));
}

const OPTIONS: AnalysisOptions = {
	nominalFrequency_Hz: 50,
	nominalVoltages_V: nominalVoltagesByPhase_V('four-wire', 400)
};

function analyse(recording: Recording, mappings = mapAll(recording), options = OPTIONS) {
	const outcome = analyseWaveform(recording, mappings, options);
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	return outcome.value;
}

const codes = (analysis: { quality: { code: string }[] }) => analysis.quality.map((q) => q.code);

describe('a four-wire point with known truth', () => {
	const recording = synthesiseRecording(point());
	const analysis = analyse(recording);

	it('has ten windows of ten cycles in two seconds, referred to the first voltage', () => {
		expect(analysis.windowCount).toBe(10);
		expect(analysis.cyclesPerWindow).toBe(10);
		expect(analysis.referenceChannelIndex).toBe(0);
	});

	it('refers every phase angle to the fundamental of the reference channel', () => {
		const u2 = analysis.channels[1]!;
		const i1 = analysis.channels[3]!;
		const at = (channel: typeof u2, order: number) => channel.phases_deg[4 * ORDER_STRIDE + order]!;
		expect(Math.abs(at(analysis.channels[0]!, 1))).toBeLessThan(1e-9);
		expect(Math.abs(at(u2, 1) + 120)).toBeLessThan(1e-4);
		// φ_5 of U2: 5·(−120°) + 40° = −560° = 160°.
		expect(Math.abs(at(u2, 5) - 160)).toBeLessThan(1e-3);
		expect(Math.abs(at(i1, 1) + 20)).toBeLessThan(1e-4);
		// φ_3 of I1: 3·(−20°) + 10° = −50°.
		expect(Math.abs(at(i1, 3) + 50)).toBeLessThan(1e-3);
	});

	it('gives active power as the mean of u·i: P1 and the orders both share', () => {
		const power = analysis.powers![0]!;
		const rad = Math.PI / 180;
		const p1_W = 230 * 100 * Math.cos(20 * rad);
		const p5_W = 230 * 0.03 * 20 * Math.cos((40 - (5 * -20 + 180)) * rad);
		const p7_W = 230 * 0.02 * 14 * Math.cos((-70 - (7 * -20 - 30)) * rad);
		expect(Math.abs(power.activePower_W[3]! - (p1_W + p5_W + p7_W))).toBeLessThan(0.05);
		expect(Math.abs(power.fundamentalReactivePower_var[3]! - 23000 * Math.sin(20 * rad))).toBeLessThan(0.05);
		expect(Math.abs(power.displacementFactor[3]! - Math.cos(20 * rad))).toBeLessThan(1e-6);
	});

	it('finds three times the third harmonic in the neutral', () => {
		const neutral = analysis.channels[6]!;
		expect(Math.abs(neutral.subgroups[3]! - 36)).toBeLessThan(1e-3);
	});

	it('has nothing to blame on the capture', () => {
		expect(analysis.quality.filter((q) => q.severity !== 'notes')).toEqual([]);
	});

	it('gives the same digits again, and the same in steps', () => {
		const again = analyse(synthesiseRecording(point()));
		expect(again.channels[3]!.subgroups).toEqual(analysis.channels[3]!.subgroups);
		const steps = analyseWaveformSteps(recording, mapAll(recording), OPTIONS);
		const seen: number[] = [];
		let step = steps.next();
		while (!step.done) {
			seen.push(step.value.done);
			step = steps.next();
		}
		expect(seen).toEqual([10]);
		expect(step.value).toEqual({ ok: true, value: analysis });
	});

	it('computes angles and powers for one instant where a channel is sampled later than the others', () => {
		const skew_s = 37e-6;
		const late = synthesiseRecording(point());
		const turn = 2 * Math.PI * 50.03;
		const current = late.channels[3]!;
		// The very current of the other tests, taken 37 µs later than its instant says.
		current.samples = current.samples.map((_, n) => {
			const t = n / 12800 + skew_s;
			const wave = (order: number, pct: number, phase_deg: number) =>
				pct * Math.SQRT2 * Math.cos(order * (turn * t - (20 * Math.PI) / 180) + (phase_deg * Math.PI) / 180);
			return wave(1, 100, 0) + wave(3, 12, 10) + wave(5, 20, 180) + wave(7, 14, -30);
		});
		current.skew_s = skew_s;
		const skewed = analyse(late);
		const at = (order: number) => 4 * ORDER_STRIDE + order;
		for (const order of [1, 3, 5, 7]) {
			const { phases_deg } = skewed.channels[3]!;
			const turned = wrapDegrees(phases_deg[at(order)]! - analysis.channels[3]!.phases_deg[at(order)]!);
			expect(Math.abs(turned), `order ${order}`).toBeLessThan(1e-3);
		}
		const power = (of: typeof analysis) => of.powers[0]!.activePower_W[4]!;
		expect(Math.abs(power(skewed) / power(analysis) - 1)).toBeLessThan(1e-6);
	});

	it('scales and turns with the factor to primary values', () => {
		const mappings = mapAll(recording).map((m) => (m.channelIndex === 3 ? { ...m, toPrimary: -40 } : m));
		const scaled = analyse(recording, mappings);
		const i1 = scaled.channels[3]!;
		expect(Math.abs(i1.subgroups[1]! - 4000)).toBeLessThan(0.01);
		expect(Math.abs(i1.rms[0]! / analysis.channels[3]!.rms[0]! - 40)).toBeLessThan(1e-9);
		expect(Math.abs(i1.phases_deg[1]! - 160)).toBeLessThan(1e-4);
	});
});

describe('missing samples', () => {
	it('make the windows that need them “no data” on that channel alone', () => {
		const recording = synthesiseRecording(point());
		recording.channels[4]!.samples.fill(NaN, 6000, 6003);
		const analysis = analyse(recording);
		const missing = [...analysis.channels[4]!.rms].map((rms, w) => (Number.isNaN(rms) ? w : -1));
		expect(missing.filter((w) => w >= 0)).toEqual([2]);
		expect(analysis.channels[4]!.subgroups[2 * ORDER_STRIDE + 5]).toBeNaN();
		expect(analysis.channels[3]!.rms[2]).not.toBeNaN();
		expect(analysis.powers![1]!.activePower_W[2]).toBeNaN();
		const remark = analysis.quality.find((q) => q.code === 'missing-samples')!;
		expect(remark.sentence).toContain('3 of 25600 samples');
		expect(remark.sentence).toContain('1 windows');
	});

	it('in the reference hold the last frequency, say so, and let the next windows recover', () => {
		const recording = synthesiseRecording(point());
		recording.channels[0]!.samples.fill(NaN, 6000, 6100);
		const analysis = analyse(recording);
		expect(
			[...analysis.frequency_Hz].map((f, w) => (Number.isNaN(f) ? w : -1)).filter((w) => w >= 0)
		).toEqual([2]);
		expect(codes(analysis)).toContain('fundamental-lost');
		for (const w of [1, 3, 4]) {
			expect(Math.abs(analysis.frequency_Hz[w]! / 50.03 - 1)).toBeLessThan(1e-6);
			expect(Math.abs(analysis.channels[3]!.subgroups[w * ORDER_STRIDE + 5]! - 20)).toBeLessThan(2e-3);
		}
	});
});

describe('what cannot be analysed is said in a sentence', () => {
	it('shorter than a window: have and need in seconds', () => {
		const recording = synthesiseRecording(point({ duration_s: 0.15 }));
		const outcome = analyseWaveform(recording, mapAll(recording), OPTIONS);
		if (outcome.ok || outcome.problem.code !== 'record-too-short') throw new Error('expected a problem');
		expect(outcome.problem.have_s).toBeCloseTo(0.15, 6);
		expect(outcome.problem.need_s).toBeGreaterThan(0.2);
		expect(outcome.problem.sentence).toContain('0.1500 s');
	});

	it('nothing mapped', () => {
		const outcome = analyseWaveform(synthesiseRecording(point()), [], OPTIONS);
		expect(outcome).toMatchObject({ ok: false, problem: { code: 'no-mapped-channels' } });
	});

	it('no fundamental anywhere: silence, direct current and missing data alike', () => {
		const recording = synthesiseRecording(point());
		for (const fill of [0, 5, NaN]) {
			for (const channel of recording.channels) channel.samples.fill(fill);
			const outcome = analyseWaveform(recording, mapAll(recording), OPTIONS);
			expect(outcome).toMatchObject({ ok: false, problem: { code: 'no-fundamental' } });
		}
	});

	it('a rate that cannot carry the fundamental', () => {
		const recording = synthesiseRecording(point({ samplingRate_Hz: 112 }));
		const outcome = analyseWaveform(recording, mapAll(recording), OPTIONS);
		expect(outcome.ok).toBe(false);
	});

	it('no rate, and stamps that stand still', () => {
		const recording = withStamps(() => 0);
		const outcome = analyseWaveform(recording, mapAll(recording), OPTIONS);
		expect(outcome).toMatchObject({ ok: false, problem: { code: 'rate-not-known' } });
	});
});

function withStamps(stamp_s: (n: number) => number): Recording {
	const recording = synthesiseRecording(point());
	recording.segments = [];
	recording.timeStamps_s = Float64Array.from({ length: recording.sampleCount }, (_, n) => stamp_s(n));
	return recording;
}

describe('time bases', () => {
	it('samples with uneven time stamps are analysed as they lie, not as if they were even', () => {
		const stamp_s = (n: number) => (n + 0.3 * Math.sin(n)) / 12800 + (n < 9000 ? 0 : 3 / 12800);
		const recording = withStamps(stamp_s);
		const current = recording.channels[3]!.samples;
		const turn = 2 * Math.PI * 50.03;
		for (let n = 0; n < current.length; n++) {
			const t = stamp_s(n);
			current[n] = Math.SQRT2 * (100 * Math.cos(turn * t) + 20 * Math.cos(5 * turn * t + 1));
		}
		for (let n = 0; n < current.length; n++)
			recording.channels[0]!.samples[n] = Math.SQRT2 * 230 * Math.cos(turn * stamp_s(n));
		const analysis = analyse(recording, [mapAll(recording)[0]!, mapAll(recording)[3]!]);
		expect(codes(analysis)).toContain('uneven-sampling');
		for (let w = 0; w < analysis.windowCount; w++) {
			// Straight lines between samples lower the fifth order by about 0.15 %.
			const fifth = analysis.channels[1]!.subgroups[w * ORDER_STRIDE + 5]!;
			expect(Math.abs(fifth - 20)).toBeLessThan(0.05);
		}
	});

	it('takes the rate from even stamps, rounded to microseconds as they are', () => {
		const analysis = analyse(withStamps((n) => Math.round((n / 12800) * 1e6) / 1e6));
		expect(codes(analysis)).toContain('rate-inferred');
		expect(Math.abs(analysis.frequency_Hz[3]! / 50.03 - 1)).toBeLessThan(1e-5);
	});

	it('analyses the stretches of several rates one by one, in order of time', () => {
		const fast = synthesiseRecording(point({ duration_s: 0.5 }));
		const slow = synthesiseRecording(point({ duration_s: 2, samplingRate_Hz: 6400 }));
		const joined: Recording = {
			...fast,
			sampleCount: fast.sampleCount + slow.sampleCount,
			segments: [
				{ samplingRate_Hz: 12800, fromSample: 0, toSample: fast.sampleCount },
				{ samplingRate_Hz: 6400, fromSample: fast.sampleCount, toSample: fast.sampleCount + slow.sampleCount }
			],
			channels: fast.channels.map((channel, c) => ({
				...channel,
				samples: Float64Array.from([...channel.samples, ...slow.channels[c]!.samples])
			}))
		};
		const analysis = analyse(joined);
		expect(analysis.windowCount).toBe(2 + 9);
		const starts = [...analysis.windowStarts_s];
		expect(starts[1]! + analysis.windowLengths_s[1]!).toBeLessThan(0.5);
		expect(starts[2]!).toBeGreaterThan(0.5);
		expect(starts[2]!).toBeLessThan(0.51);
		expect(codes(analysis)).toContain('several-stretches');
		for (let w = 0; w < 11; w++)
			expect(Math.abs(analysis.channels[3]!.subgroups[w * ORDER_STRIDE + 5]! - 20)).toBeLessThan(2e-3);
	});

	it('starts the train of windows anew at a ten-minute tick and completes the window that straddles it', () => {
		const recording = synthesiseRecording(point());
		// Sample 0 lies 0.93 s before ten past.
		const analysis = analyse(recording, mapAll(recording), { ...OPTIONS, start_ms: 600_000 - 930 });
		const first = [...analysis.resync].indexOf(1);
		expect([...analysis.resync].filter((r) => r === 1)).toHaveLength(1);
		expect(Math.abs(analysis.windowStarts_s[first]! - 0.93)).toBeLessThan(1e-9);
		const end_s = analysis.windowStarts_s[first - 1]! + analysis.windowLengths_s[first - 1]!;
		expect(end_s).toBeGreaterThan(0.93);
		expect(end_s).toBeLessThan(0.93 + analysis.windowLengths_s[first]!);
		for (let w = 0; w < analysis.windowCount; w++)
			expect(Math.abs(analysis.channels[3]!.subgroups[w * ORDER_STRIDE + 5]! - 20)).toBeLessThan(2e-3);
	});
});

describe('flagged windows', () => {
	it('a dip to 70 % on one phase flags the windows it touches, and no others', () => {
		const truth = point();
		truth.channels[1] = { ...truth.channels[1]!, events: [{ from_s: 0.95, to_s: 1.05, factor: 0.7 }] };
		const analysis = analyse(synthesiseRecording(truth));
		// Windows of about 0.2 s: the dip lies in those that start at 0.8 s and 1.0 s.
		expect([...analysis.flagged]).toEqual([0, 0, 0, 0, 1, 1, 0, 0, 0, 0]);
		const dip = analysis.quality.find((q) => q.code === 'dip')!;
		// 70 % of 230 V with its 5th and 7th, on 400/√3 V: 69.8 %.
		expect(dip.sentence).toMatch(/^L2: dip to 69\.8 %/);
	});

	it('swells and interruptions flag as well', () => {
		const truth = point();
		truth.channels[2] = {
			...truth.channels[2]!,
			events: [
				{ from_s: 0.45, to_s: 0.5, factor: 1.2 },
				{ from_s: 1.5, to_s: 1.55, factor: 0 }
			]
		};
		const analysis = analyse(synthesiseRecording(truth));
		expect([...analysis.flagged]).toEqual([0, 0, 1, 0, 0, 0, 0, 1, 0, 0]);
		// One conductor without voltage is a dip of the system; an interruption takes all of them.
		expect(codes(analysis)).toEqual(expect.arrayContaining(['swell', 'dip']));
		expect(codes(analysis)).not.toContain('interruption');
		for (const c of [0, 1, 2])
			truth.channels[c] = { ...truth.channels[c]!, events: [{ from_s: 1.5, to_s: 1.55, factor: 0 }] };
		const interrupted = analyse(synthesiseRecording(truth));
		expect(codes(interrupted)).toContain('interruption');
		expect([...interrupted.flagged]).toEqual([0, 0, 0, 0, 0, 0, 0, 1, 0, 0]);
	});

	it('without a nominal voltage nothing is flagged, and that is said', () => {
		const recording = synthesiseRecording(point());
		const analysis = analyse(recording, mapAll(recording), { nominalFrequency_Hz: 50 });
		expect(codes(analysis)).toContain('events-not-checked');
	});
});
