import { describe, expect, it } from 'vitest';
import { analyseWaveform, type AnalysisOptions } from '$lib/harmonics/analyse-waveform';
import { nominalVoltagesByPhase_V } from '$lib/harmonics/nominal-voltages';
import type { ChannelMapping, QualityRemark } from '$lib/harmonics/waveform-analysis';
import type { Recording } from '$lib/recording/recording';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels, type ThreePhaseTruth } from '$lib/synthesis/waveform-three-phase';
import type { ChannelTruth } from '$lib/synthesis/waveform';

// Brief of the trade: what has to be shown before anybody reads a verdict (common practice; no published figures).
const POINT: ThreePhaseTruth = {
	voltage_V: 277,
	voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 2, phase_deg: 0 }],
	current_A: 80,
	currentHarmonics: [{ order: 5, magnitude_pctOfFundamental: 25, phase_deg: 180 }],
	lag_deg: 30
};
const OPTIONS: AnalysisOptions = {
	nominalFrequency_Hz: 60,
	nominalVoltages_V: nominalVoltagesByPhase_V('four-wire', 480)
};

function record(
	change: (channels: ChannelTruth[]) => void = () => undefined,
	frequency_Hz = 60.02
): Recording {
	const channels = threePhaseChannels(POINT);
	change(channels);
	return synthesiseRecording(
		{ frequency_Hz, samplingRate_Hz: 15360, duration_s: 1, seed: 5, channels },
		{ nominalFrequency_Hz: 60 }
	);
}

function remarks(
	recording: Recording,
	remap: (mapping: ChannelMapping) => ChannelMapping = (m) => m,
	options = OPTIONS
): QualityRemark[] {
	const mappings = recording.channels.map((channel) =>
		remap({
			channelIndex: channel.index,
			quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
			phase: channel.phaseHint!,
			toPrimary: 1
		})
	);
	const outcome = analyseWaveform(recording, mappings, options);
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	return outcome.value.quality;
}

const grave = (list: QualityRemark[]) => list.filter((r) => r.severity !== 'notes').map((r) => r.code);

describe('a sound capture', () => {
	it('gets no warning', () => {
		expect(grave(remarks(record()))).toEqual([]);
	});

	it('gets none either when stored with 12 or 16 bits', () => {
		for (const bits of [12, 16]) {
			const recording = record((channels) => {
				for (const c of channels) c.quantisation = { bits, fullScale: c.fundamental_rms * 2 };
			});
			expect(grave(remarks(recording))).toEqual([]);
		}
	});

	it('gets none where the file was scaled so that its crest is the greatest code', () => {
		const recording = record((channels) => {
			for (const c of channels) c.quantisation = { bits: 16, fullScale: c.fundamental_rms * 2 };
		});
		for (const channel of recording.channels) {
			channel.range = { min: Math.min(...channel.samples), max: Math.max(...channel.samples) };
		}
		expect(grave(remarks(recording))).toEqual([]);
	});
});

describe('connection', () => {
	it('one reversed current transformer is named', () => {
		const found = remarks(record(), (m) => (m.channelIndex === 4 ? { ...m, toPrimary: -1 } : m));
		expect(grave(found)).toEqual(['reversed-ct']);
		expect(found[0]!.channelIndex).toBe(4);
		expect(found[0]!.sentence).toContain('L2');
	});

	it('two exchanged currents are named', () => {
		const swap: Record<number, 'L1' | 'L2'> = { 3: 'L2', 4: 'L1' };
		const found = remarks(record(), (m) => ({ ...m, phase: swap[m.channelIndex] ?? m.phase }));
		expect(grave(found)).toEqual(['swapped-ct']);
		expect(found[0]!.sentence).toMatch(/L2 is on L1, as L1 is on L2/);
	});

	it('power that flows out on every phase is a question, not a fault', () => {
		const found = remarks(record(), (m) => (m.quantity === 'current' ? { ...m, toPrimary: -1 } : m));
		expect(grave(found)).toEqual(['power-flows-out']);
	});

	it('exchanged voltage leads turn the rotation round', () => {
		const swap: Record<number, 'L2' | 'L3'> = { 1: 'L3', 2: 'L2', 4: 'L3', 5: 'L2' };
		const found = remarks(record(), (m) => ({ ...m, phase: swap[m.channelIndex] ?? m.phase }));
		expect(grave(found)).toEqual(['negative-rotation']);
	});

	it('line-to-line voltages serve for the check as well', () => {
		const lineToLine = (['L1L2', 'L2L3', 'L3L1'] as const).map((phase, i): ChannelTruth => ({
			name: phase,
			quantity: 'voltage',
			phase,
			fundamental_rms: 480,
			fundamentalPhase_deg: 30 - 120 * i,
			harmonics: []
		}));
		const recording = record((channels) => channels.splice(0, 3, ...lineToLine));
		expect(grave(remarks(recording))).toEqual([]);
		const turned = remarks(recording, (m) => (m.channelIndex === 3 ? { ...m, toPrimary: -1 } : m));
		expect(grave(turned)).toEqual(['reversed-ct']);
	});
});

describe('levels', () => {
	it('a channel cut off at the end of the range blocks', () => {
		const recording = record((channels) => {
			channels[3]!.quantisation = { bits: 16, fullScale: 100 };
		});
		const found = remarks(recording);
		expect(found[0]).toMatchObject({ code: 'clipped', severity: 'blocks', channelIndex: 3 });
	});

	it('flat tops without a stated range warn', () => {
		const recording = record();
		const channel = recording.channels[4]!;
		channel.samples = channel.samples.map((v) => Math.max(-95, Math.min(95, v)));
		expect(remarks(recording).find((r) => r.code === 'clipped')).toMatchObject({
			severity: 'warns',
			channelIndex: 4
		});
	});

	it('a dead channel is named', () => {
		const recording = record();
		recording.channels[5]!.samples.fill(0.002);
		expect(remarks(recording).find((r) => r.code === 'dead-channel')).toMatchObject({ channelIndex: 5 });
	});

	it('a missing voltage ratio blocks, and the ratio of the file is recognised', () => {
		const recording = record();
		const channel = recording.channels[0]!;
		channel.samples = channel.samples.map((v) => v / 2.4);
		channel.ratio = { primary: 288, secondary: 120 };
		const found = remarks(recording);
		expect(found[0]).toMatchObject({ code: 'voltage-far-from-nominal', severity: 'blocks', channelIndex: 0 });
		expect(found[0]!.sentence).toContain('288 : 120');
	});

	it('a line-to-line voltage mapped as line-to-neutral is recognised by √3', () => {
		const recording = record((channels) => {
			for (const c of channels.slice(0, 3)) c.fundamental_rms = 480;
		});
		expect(remarks(recording)[0]!.sentence).toContain('√3');
	});

	it('a constant part is told', () => {
		const recording = record((channels) => {
			channels[3]!.dc = 12;
		});
		const remark = remarks(recording).find((r) => r.code === 'dc-offset')!;
		expect(remark).toMatchObject({ severity: 'warns', channelIndex: 3 });
		expect(remark.sentence).toContain('12.0 A');
	});
});

describe('frequency and rate', () => {
	it('a 50 Hz capture at a 60 Hz point blocks, and the file that states 60 Hz is doubted', () => {
		const found = remarks(record(undefined, 49.97));
		expect(found.map((r) => [r.code, r.severity])).toEqual(
			expect.arrayContaining([
				['wrong-nominal-frequency', 'blocks'],
				['stated-frequency-differs', 'warns']
			])
		);
	});

	it.each([400, 16.7])('%d Hz blocks, without a crash', (frequency_Hz) => {
		const found = remarks(record(undefined, frequency_Hz));
		expect(found[0]).toMatchObject({ code: 'frequency-out-of-range', severity: 'blocks' });
		expect(found[0]!.sentence).toContain(`${frequency_Hz.toFixed(3)} Hz`);
	});
});
