import { describe, expect, it } from 'vitest';
import { analyseWaveform } from '$lib/harmonics/analyse-waveform';
import type { ChannelMapping } from '$lib/harmonics/waveform-analysis';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';

const RATE_HZ = 2400;
const TICK_MS = 600_000 * 2_900_000;

/** Two voltages, the first with 39 rectangular changes a minute of 0.894 %: Pst = 1 (IEC 61000-4-15:2010, table 5). */
function recording(duration_s: number) {
	const made = synthesiseRecording({
		frequency_Hz: 50,
		samplingRate_Hz: RATE_HZ,
		duration_s,
		seed: 1,
		channels: (['U1', 'U2'] as const).map((name) => ({
			name,
			quantity: 'voltage' as const,
			phase: name === 'U1' ? ('L1' as const) : ('L2' as const),
			fundamental_rms: 230,
			fundamentalPhase_deg: 0,
			harmonics: []
		}))
	});
	const samples = made.channels[0]!.samples;
	for (let n = 0; n < samples.length; n++) {
		const isHigh = ((n / RATE_HZ) * 39) / 120 - Math.floor(((n / RATE_HZ) * 39) / 120) < 0.5;
		samples[n]! *= 1 + (isHigh ? 0.00447 : -0.00447);
	}
	return made;
}

const MAPPINGS: ChannelMapping[] = [
	{ channelIndex: 0, quantity: 'voltage', phase: 'L1', toPrimary: 1 },
	{ channelIndex: 1, quantity: 'voltage', phase: 'L2', toPrimary: 1 }
];

function analyse(duration_s: number, start_ms: number) {
	const outcome = analyseWaveform(recording(duration_s), MAPPINGS, {
		nominalFrequency_Hz: 50,
		nominalVoltages_V: { L1: 230, L2: 230, L3: 230 },
		start_ms
	});
	if (!outcome.ok) throw new Error(outcome.problem.sentence);
	return outcome.value;
}

describe('flicker of a capture', () => {
	it('is measured on every voltage over the ten minutes of the clock that the capture fills', () => {
		const { flicker } = analyse(630, TICK_MS - 25_000);
		expect(flicker.map((one) => one.phase)).toEqual(['L1', 'L2']);
		expect(flicker[0]!.shortTerm).toHaveLength(1);
		expect(flicker[0]!.shortTerm[0]!.start_ms).toBe(TICK_MS);
		expect(Math.abs(flicker[0]!.shortTerm[0]!.pst - 1)).toBeLessThan(0.01);
		expect(flicker[1]!.shortTerm[0]!.pst).toBeLessThan(0.02);
		expect(flicker[0]!.longTerm).toEqual([]);
	});

	it('is not given where the capture fills none', () => {
		expect(analyse(60, TICK_MS).flicker).toEqual([]);
	});
});
