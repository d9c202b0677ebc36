import { describe, expect, it } from 'vitest';
import { analyseCapture, analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { joinSpans } from '$lib/harmonics/engine/join-spans';
import type { ChannelMapping, WaveformWindows } from '$lib/harmonics/waveform-analysis';
import type { CaptureSource } from '$lib/recording/sample-source';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';

/** A point recorded as rows of 16-bit integers, in memory and as bytes. */
function rowsAndMemory() {
	const recording = synthesiseRecording({
		frequency_Hz: 50.07,
		samplingRate_Hz: 10_000,
		duration_s: 20,
		seed: 4,
		channels: threePhaseChannels({
			voltage_V: 230,
			voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 4, phase_deg: 30 }],
			current_A: 60,
			currentHarmonics: [{ order: 7, magnitude_pctOfFundamental: 11, phase_deg: 80 }],
			lag_deg: 25,
			withNeutral: true
		})
	});
	const count = recording.channels.length;
	const rowBytes = 8 + 2 * count;
	const bytes = new Uint8Array(rowBytes * recording.sampleCount);
	const view = new DataView(bytes.buffer);
	const factors = recording.channels.map((c) => (c.quantity === 'voltage' ? 400 : 120) / 32767);
	recording.channels.forEach((channel, c) => {
		for (let i = 0; i < recording.sampleCount; i++) {
			const missing = c === 4 && i > 60_000 && i < 60_010;
			const raw = missing ? -32768 : Math.round(channel.samples[i]! / factors[c]!);
			view.setInt16(i * rowBytes + 8 + 2 * c, raw, true);
			channel.samples[i] = missing ? NaN : factors[c]! * raw;
		}
	});
	const source: CaptureSource = {
		...recording,
		samples: {
			kind: 'rows',
			layout: {
				format: 'int16',
				rowBytes,
				offsets: recording.channels.map((_, c) => 8 + 2 * c),
				factors,
				additions: recording.channels.map(() => 0)
			},
			read: (from, rows, into) => into.set(bytes.subarray(from * rowBytes, (from + rows) * rowBytes))
		}
	};
	const mappings = recording.channels.map((channel): ChannelMapping => ({
		channelIndex: channel.index,
		quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
		phase: channel.phaseHint!,
		toPrimary: 1
	}));
	return { recording, source, mappings };
}

describe('a capture that is fetched block by block', () => {
	it('gives the very figures that it gives when it lies in memory', () => {
		const { recording, source, mappings } = rowsAndMemory();
		// A tick of the clock seven seconds into the capture, and events looked for.
		const options = {
			nominalFrequency_Hz: 50 as const,
			nominalVoltages_V: { L1: 230, L2: 230, L3: 230 },
			start_ms: 593_000
		};
		const inMemory = analyseWaveform(recording, mappings, options);
		const spans: WaveformWindows[] = [];
		const steps = analyseCapture(source, mappings, options, (span) => spans.push(span));
		let step = steps.next();
		while (!step.done) step = steps.next();
		if (!inMemory.ok || !step.value.ok) throw new Error('not analysed');
		expect(spans).toHaveLength(2);
		expect({ ...step.value.value, ...joinSpans(spans) }).toEqual(inMemory.value);
		expect(inMemory.value.quality.map((q) => q.code)).toContain('missing-samples');
	});
});
