import { describe, expect, it } from 'vitest';
import { analyseCapture } from '$lib/harmonics/analyse-waveform';
import { IntervalCollector } from '$lib/harmonics/engine/interval-collector';
import { pairChannels } from '$lib/harmonics/engine/prepare-capture';
import type { ChannelMapping, WaveformWindows } from '$lib/harmonics/waveform-analysis';
import { sourceOf } from '$lib/recording/sample-source';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';

/** Eleven and a half minutes across a ten-minute tick, at a rate that reaches order 15. */
function longCapture() {
	const recording = synthesiseRecording({
		frequency_Hz: 50,
		samplingRate_Hz: 2000,
		duration_s: 4,
		seed: 5,
		channels: threePhaseChannels({
			voltage_V: 230,
			voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 4, phase_deg: 0 }],
			current_A: 50,
			currentHarmonics: [{ order: 7, magnitude_pctOfFundamental: 10, phase_deg: 0 }],
			lag_deg: 15,
			withNeutral: false
		})
	});
	const repeats = 173;
	for (const channel of recording.channels) {
		const once = channel.samples;
		channel.samples = new Float64Array(repeats * once.length);
		for (let i = 0; i < repeats; i++) channel.samples.set(once, i * once.length);
	}
	const sampleCount = recording.channels[0]!.samples.length;
	return {
		...recording,
		sampleCount,
		segments: [{ samplingRate_Hz: 2000, fromSample: 0, toSample: sampleCount }]
	};
}

describe('a capture longer than ten minutes', () => {
	it('comes in spans that end at the tick, and its aggregates stand on the clock', () => {
		const recording = longCapture();
		const mappings = recording.channels.map((channel): ChannelMapping => ({
			channelIndex: channel.index,
			quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
			phase: channel.phaseHint!,
			toPrimary: 1
		}));
		const tick_ms = 600_000 * 2_900_000;
		const start_ms = tick_ms - 45_000;
		const collector = new IntervalCollector(mappings, pairChannels(mappings), start_ms);
		const spans: WaveformWindows[] = [];
		const steps = analyseCapture(
			sourceOf(recording),
			mappings,
			{ nominalFrequency_Hz: 50, start_ms },
			(span) => {
				spans.push(span);
				collector.accept(span);
			}
		);
		while (!steps.next().done);
		collector.finish();
		// A span ends at every tick, and after about two minutes: 45 s, then ten minutes in five pieces, then the rest.
		expect(spans.map((span) => span.resync[0])).toEqual([0, 1, 0, 0, 0, 0, 1]);
		expect(Math.max(...spans.map((span) => span.windowCount))).toBeLessThanOrEqual(620);
		const [tenMinutes] = collector.series('10min');
		expect([...tenMinutes!.starts_ms]).toEqual([tick_ms]);
		expect(Math.abs(tenMinutes!.subgroups[5]! - 9.2)).toBeLessThan(0.01);
		// The group that is open at a tick is completed with windows after it.
		const starts = [...collector.series('3s')[0]!.starts_ms];
		const atTick = starts.findIndex((start) => Math.abs(start - tick_ms) < 1);
		expect(starts[atTick]! - starts[atTick - 1]!).toBeLessThan(3000);
		expect(starts[atTick + 1]! - starts[atTick]!).toBeCloseTo(3000, 3);
		const power = collector
			.scalarSeries('10min')
			.find((one) => one.measure === 'active-power' && one.phase === 'total')!;
		const expected_W = 3 * 230 * 50 * Math.cos((15 * Math.PI) / 180);
		expect(Math.abs(power.values[0]! / expected_W - 1)).toBeLessThan(1e-3);
	});
});
