import { expect, it } from 'vitest';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import type { ChannelTruth } from '$lib/synthesis/waveform';

// IEEE Std 1459-2010, numerical example for single-phase non-sinusoidal conditions (from memory; its printed results
// reproduce from these inputs). Angles of the example are those of sines, each at its own order.
const VOLTAGE: Record<number, [number, number]> = { 1: [100, 0], 3: [8, -70], 5: [15, 140], 7: [5, 20] };
const CURRENT: Record<number, [number, number]> = {
	1: [100, -30],
	3: [20, -165],
	5: [15, 233],
	7: [10, 288]
};

function channel(
	name: string,
	quantity: 'voltage' | 'current',
	table: Record<number, [number, number]>
): ChannelTruth {
	const [rms, sinePhase_deg] = table[1]!;
	const start_deg = sinePhase_deg - 90;
	return {
		name,
		quantity,
		phase: 'L1',
		fundamental_rms: rms,
		fundamentalPhase_deg: start_deg,
		harmonics: Object.entries(table)
			.filter(([order]) => order !== '1')
			.map(([order, [value, phase_deg]]) => ({
				order: Number(order),
				magnitude_pctOfFundamental: (100 * value) / rms,
				phase_deg: phase_deg - 90 - Number(order) * start_deg
			}))
	};
}

it('gives P, P1, Q1, rms and power factors of the example', () => {
	const recording = synthesiseRecording({
		frequency_Hz: 60.013,
		samplingRate_Hz: 15360,
		duration_s: 0.5,
		seed: 1,
		channels: [channel('U', 'voltage', VOLTAGE), channel('I', 'current', CURRENT)]
	});
	const outcome = analyseWaveform(
		recording,
		[
			{ channelIndex: 0, quantity: 'voltage', phase: 'L1', toPrimary: 1 },
			{ channelIndex: 1, quantity: 'current', phase: 'L1', toPrimary: 1 }
		],
		{ nominalFrequency_Hz: 60 }
	);
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	const power = outcome.value.powers![0]!;
	const [voltage, current] = outcome.value.channels;
	// Relative 1e-5: rms by straight lines between samples and 120 dB of interpolation.
	const close = (value: number, expected: number) =>
		expect(Math.abs(value / expected - 1)).toBeLessThan(1e-5);
	close(voltage!.rms[0]!, 101.5578653);
	close(current!.rms[0]!, 103.5615759);
	close(power.fundamentalActivePower_W[0]!, 8660.254038);
	close(power.fundamentalReactivePower_var[0]!, 5000);
	close(power.activePower_W[0]!, 8632.788554);
	close(power.displacementFactor[0]!, 0.8660254038);
	close(power.powerFactor[0]!, 0.8208029143);
	close(voltage!.thd_pctOfFundamental[0]!, 17.72004515);
	close(current!.thd_pctOfFundamental[0]!, 26.92582404);
});
