import { describe, expect, it } from 'vitest';
import { analyseCapture, analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { joinSpans } from '$lib/harmonics/engine/join-spans';
import type { ChannelMapping, WaveformWindows } from '$lib/harmonics/waveform-analysis';
import { handleOf, type CaptureHandle } from '$lib/recording/capture-handle';
import { loadSamples } from '$lib/recording/load-samples';
import { memoryScratch } from '$lib/recording/memory-scratch';
import { openCapture, readCapture } from '$lib/recording/read-capture';
import type { CaptureFile } from '$lib/recording/recording';
import type { SampleScratch } from '$lib/recording/sample-scratch';
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

/** Handles that note the largest piece asked for, and a scratch that notes the largest piece appended. */
function watched(files: CaptureFile[]) {
	const seen = { largestRead: 0, largestAppend: 0 };
	const handles = files.map((file): CaptureHandle => {
		const handle = handleOf(file);
		return {
			...handle,
			read: (offset, into) => {
				if (!/\.cfg$/i.test(file.name)) seen.largestRead = Math.max(seen.largestRead, into.length);
				handle.read(offset, into);
			}
		};
	});
	const inner = memoryScratch();
	const scratch: SampleScratch = {
		create() {
			const file = inner.create();
			return {
				append(bytes) {
					seen.largestAppend = Math.max(seen.largestAppend, bytes.length);
					file.append(bytes);
				},
				seal: () => file.seal()
			};
		}
	};
	return { handles, scratch, seen };
}

describe.each([
	['ASCII data', { revision: '1999', dataFormat: 'ASCII' }],
	['ASCII in a combined file', { revision: '2013', dataFormat: 'ASCII', combined: true }],
	['BINARY in a combined file', { revision: '2013', dataFormat: 'BINARY', combined: true }],
	['FLOAT32 in a combined file', { revision: '2013', dataFormat: 'FLOAT32', combined: true }]
] as const)('%s', (_, variant) => {
	const files = writeComtrade(recording, { ...variant, stem: 'piece' });

	it('are read piece by piece and give the very samples of the whole', () => {
		const { handles, scratch, seen } = watched(files);
		const opened = openCapture(handles, { scratch });
		const read = readCapture(files);
		if (!opened.ok || !read.ok || opened.value.kind !== 'waveform' || read.value.kind !== 'waveform')
			throw new Error('not read');
		expect(opened.value.samples.kind).toBe('rows');
		expect(loadSamples(opened.value)).toEqual(read.value);
		expect(seen.largestRead).toBeLessThanOrEqual(1 << 18);
		expect(seen.largestAppend).toBeLessThanOrEqual(1 << 18);
		expect(files.at(-1)!.bytes.length).toBeGreaterThan(1 << 18);
	});
});

describe('time stamps instead of a rate', () => {
	const stamps = (jitter_s: number) =>
		Float64Array.from({ length: recording.sampleCount }, (_, n) => n / 8000 + (n % 7 === 3 ? jitter_s : 0));
	const opened = (dataFormat: 'ASCII' | 'BINARY', timeStamps_s: Float64Array) => {
		const files = writeComtrade(
			{ ...recording, segments: [], timeStamps_s },
			{ revision: '1999', dataFormat, stem: 'stamped' }
		);
		const { handles, scratch, seen } = watched(files);
		const result = openCapture(handles, { scratch });
		if (!result.ok || result.value.kind !== 'waveform') throw new Error('not read');
		return { source: result.value, seen, read: readCapture(files) };
	};

	it.each(['ASCII', 'BINARY'] as const)('%s: even ones make a rate, and nothing is held', (dataFormat) => {
		const { source, seen, read } = opened(dataFormat, stamps(0));
		expect(source.timeStamps_s).toBeNull();
		expect(source.segments[0]?.samplingRate_Hz).toBeCloseTo(8000, 3);
		expect(seen.largestRead).toBeLessThanOrEqual(1 << 18);
		expect(read.ok && loadSamples(source)).toEqual(read.ok && read.value);
	});

	it.each(['ASCII', 'BINARY'] as const)(
		'%s: uneven ones stay, and the figures are the same',
		(dataFormat) => {
			const { source, read } = opened(dataFormat, stamps(40e-6));
			if (!read.ok || read.value.kind !== 'waveform') throw new Error('not read');
			expect(source.timeStamps_s).toEqual(read.value.timeStamps_s);
			expect(source.timeStamps_s?.[3]).toBeCloseTo(3 / 8000 + 40e-6, 9);
			const mappings = [{ channelIndex: 0, quantity: 'voltage', phase: 'L1', toPrimary: 1 } as const];
			const spans: WaveformWindows[] = [];
			const options = { nominalFrequency_Hz: 60 } as const;
			const steps = analyseCapture(source, mappings, options, (span) => spans.push(span));
			let step = steps.next();
			while (!step.done) step = steps.next();
			const inMemory = analyseWaveform(read.value, mappings, options);
			if (!inMemory.ok || !step.value.ok) throw new Error('not analysed');
			expect(joinSpans(spans).channels).toEqual(inMemory.value.channels);
		}
	);
});

it('refusals are those of the reader', () => {
	const alone = [writeComtrade(recording, { revision: '1999', dataFormat: 'ASCII', stem: 'alone' })[0]!];
	expect(openCapture(alone.map(handleOf))).toEqual(readCapture(alone));
});
