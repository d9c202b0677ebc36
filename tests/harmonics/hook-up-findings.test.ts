import { describe, expect, it } from 'vitest';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { nominalVoltagesByPhase_V } from '$lib/harmonics/nominal-voltages';
import type { ChannelMapping, QualityRemark } from '$lib/harmonics/waveform-analysis';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';
import type { ChannelTruth } from '$lib/synthesis/waveform';

// What a hook-up can get wrong (common practice; no published figures).
function remarks(
	change: (channels: ChannelTruth[]) => void,
	remap: (mapping: ChannelMapping) => ChannelMapping = (mapping) => mapping
): QualityRemark[] {
	const channels = threePhaseChannels({
		voltage_V: 277,
		voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 2, phase_deg: 0 }],
		current_A: 80,
		currentHarmonics: [{ order: 5, magnitude_pctOfFundamental: 25, phase_deg: 180 }],
		lag_deg: 30
	});
	change(channels);
	const recording = synthesiseRecording(
		{ frequency_Hz: 60.02, samplingRate_Hz: 15360, duration_s: 1, seed: 5, channels },
		{ nominalFrequency_Hz: 60 }
	);
	const mappings = recording.channels.map((channel) =>
		remap({
			channelIndex: channel.index,
			quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
			phase: channel.phaseHint!,
			toPrimary: 1
		})
	);
	const outcome = analyseWaveform(recording, mappings, {
		nominalFrequency_Hz: 60,
		nominalVoltages_V: nominalVoltagesByPhase_V('four-wire', 480)
	});
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	return outcome.value.quality;
}
const of = (code: string, list: QualityRemark[]) => list.filter((remark) => remark.code === code);

/** The second current as a copy of the first, apart from its size. */
const copied = (gain: number) => (channels: ChannelTruth[]) => {
	const [one, two] = [channels[3]!, channels[4]!];
	two.fundamental_rms = one.fundamental_rms * gain;
	two.fundamentalPhase_deg = one.fundamentalPhase_deg;
	two.harmonics = one.harmonics;
};

describe('one conductor recorded twice', () => {
	it('blocks the second of two channels that carry one wave', () => {
		expect(of('same-signal', remarks(copied(1.002)))).toMatchObject([
			{ severity: 'blocks', channelIndex: 4 }
		]);
	});
	it('does not take two waves of one shape and two sizes for one', () => {
		expect(of('same-signal', remarks(copied(1.05)))).toEqual([]);
	});
});

it('a current channel that is mapped as a voltage blocks', () => {
	const found = remarks(
		() => undefined,
		(mapping) => (mapping.channelIndex === 3 ? { ...mapping, quantity: 'voltage' } : mapping)
	);
	expect(of('quantity-swapped', found)).toMatchObject([{ severity: 'blocks', channelIndex: 3 }]);
});

it('a dead voltage blocks', () => {
	const found = remarks((channels) => {
		channels[1]!.fundamental_rms = 0.01;
		channels[1]!.harmonics = [];
	});
	expect(of('dead-channel', found)).toMatchObject([{ severity: 'blocks', channelIndex: 1 }]);
});
