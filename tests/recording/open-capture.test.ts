import { describe, expect, it } from 'vitest';
import { analyseCapture, analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { joinSpans } from '$lib/harmonics/engine/join-spans';
import type { ChannelMapping, WaveformWindows } from '$lib/harmonics/waveform-analysis';
import { handleOf, type CaptureHandle } from '$lib/recording/capture-handle';
import { openCapture, readCapture } from '$lib/recording/read-capture';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import { synthesiseRecording } from '$lib/synthesis/waveform-recording';
import { threePhaseChannels } from '$lib/synthesis/waveform-three-phase';

const recording = {
	...synthesiseRecording({
		frequency_Hz: 60.02,
		samplingRate_Hz: 7680,
		duration_s: 4,
		seed: 9,
		channels: threePhaseChannels({
			voltage_V: 277,
			voltageHarmonics: [{ order: 5, magnitude_pctOfFundamental: 2, phase_deg: 0 }],
			current_A: 40,
			currentHarmonics: [{ order: 7, magnitude_pctOfFundamental: 9, phase_deg: 12 }],
			lag_deg: 10,
			withNeutral: false
		})
	}),
	start: { local: '2026-03-10T09:00:00.000000', utcOffset_min: null }
};

describe.each(['BINARY', 'BINARY32', 'FLOAT32'] as const)('%s data left in their file', (dataFormat) => {
	const files = writeComtrade(recording, { revision: '2013', dataFormat, stem: 'left' });
	const reads: number[] = [];
	const handles = files.map((file): CaptureHandle => {
		const handle = handleOf(file);
		return {
			...handle,
			read: (offset, into) => {
				if (/\.dat$/i.test(file.name)) reads.push(into.length);
				handle.read(offset, into);
			}
		};
	});

	it('tell the same of the capture, and give the same figures', () => {
		const opened = openCapture(handles);
		const read = readCapture(files);
		if (!opened.ok || !read.ok || opened.value.kind !== 'waveform' || read.value.kind !== 'waveform')
			throw new Error('not read');
		const { samples, ...frame } = opened.value;
		expect(samples.kind).toBe('rows');
		expect(frame).toEqual({
			...read.value,
			channels: read.value.channels.map(({ samples: _samples, ...facts }) => facts)
		});
		const mappings = read.value.channels.map((channel): ChannelMapping => ({
			channelIndex: channel.index,
			quantity: channel.quantity === 'voltage' ? 'voltage' : 'current',
			phase: channel.phaseHint!,
			toPrimary: 1
		}));
		const spans: WaveformWindows[] = [];
		const options = { nominalFrequency_Hz: 60 } as const;
		const steps = analyseCapture(opened.value, mappings, options, (span) => spans.push(span));
		let step = steps.next();
		while (!step.done) step = steps.next();
		const inMemory = analyseWaveform(read.value, mappings, options);
		if (!inMemory.ok) throw new Error('not analysed');
		const streamed = joinSpans(spans);
		expect(streamed.windowCount).toBe(inMemory.value.windowCount);
		inMemory.value.channels.forEach((channel, c) =>
			channel.subgroups.forEach((value, i) => {
				const other = streamed.channels[c]!.subgroups[i]!;
				expect(Math.abs(other - value)).toBeLessThan(1e-11 * channel.rms[0]!);
			})
		);
		// The largest piece ever asked for is small beside the file.
		expect(Math.max(...reads)).toBeLessThanOrEqual(1 << 20);
	});
});

describe('files that have to be read whole', () => {
	it('ASCII data come as samples in memory, and refusals are those of the reader', () => {
		const ascii = writeComtrade(recording, { revision: '1999', dataFormat: 'ASCII', stem: 'whole' });
		const opened = openCapture(ascii.map(handleOf));
		if (!opened.ok || opened.value.kind !== 'waveform') throw new Error('not read');
		expect(opened.value.samples.kind).toBe('memory');
		const alone = [ascii.find((file) => /cfg$/i.test(file.name))!];
		expect(openCapture(alone.map(handleOf))).toEqual(readCapture(alone));
	});
});
