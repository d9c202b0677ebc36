import { describe, expect, it } from 'vitest';
import { analyseCapture, analyseWaveform } from '$lib/harmonics/analyse-waveform';
import { joinSpans } from '$lib/harmonics/engine/join-spans';
import type { WaveformWindows } from '$lib/harmonics/waveform-analysis';
import { captureFacts } from '$lib/recording/capture-facts';
import { handleOf } from '$lib/recording/capture-handle';
import { loadSamples } from '$lib/recording/load-samples';
import { openCapture, readCapture } from '$lib/recording/read-capture';
import type { Recording } from '$lib/recording/recording';
import { expectSamples } from './expect-samples';
import { expectedFiles, sampleCapture, samplesArePresent, skipReason } from './sample-files';

// Source of every expected figure: ../shared/samples/expected.json, made by an independent numpy program. Orders, THD, rms
// and the frequency of the stereo files are held to it in real-recordings-harmonics.test.ts.

const all = Object.entries(expectedFiles()).filter(([, file]) => file.format === 'WAV');
/** What 1.0 means in the figures: volts and amperes, or counts of the converter. */
const FULL_SCALE: Record<string, number> = { V: 250, A: 25, '(counts)': 32_768 };

const WORDS: Record<string, string> = {
	'PCM 16 bit': '16 bit PCM',
	'PCM 16 bit mono': '16 bit PCM',
	'IEEE float 32 bit, 18-byte fmt chunk': '32 bit float',
	'WAVE_FORMAT_EXTENSIBLE, 24 bit': '24 bit PCM'
};

function read(path: string): Recording {
	const result = readCapture(sampleCapture(path));
	if (!result.ok || result.value.kind !== 'waveform') throw new Error('not read');
	return result.value;
}

describe.skipIf(!samplesArePresent)(`WAV recordings of other makers${skipReason}`, () => {
	it('finds all five', () => expect(all.length).toBe(5));

	it.each(all)('%s is read with the expected form, rate and samples', (path, file) => {
		const recording = read(path);
		expect(recording).toMatchObject({
			format: 'WAV',
			variant: WORDS[file.form ?? ''],
			sampleCount: file.frames,
			segments: [{ samplingRate_Hz: file.fs_hz, fromSample: 0, toSample: file.frames }],
			start: null
		});
		expect(recording.channels.length).toBe(file.channels?.length);
		for (const [index, channel] of (file.channels ?? []).entries()) {
			if (!channel.all_samples) continue;
			const scale = FULL_SCALE[channel.unit]!;
			const ours = recording.channels[index]!;
			expectSamples({ ...ours, samples: ours.samples.map((v) => v * scale) }, '', channel.all_samples);
		}
		expect(recording.remarks.map(({ code }) => code)).toEqual(['wav-no-units', 'wav-no-clock']);
	});

	it.each(all)('%s is opened in place and gives the very samples of the whole', (path) => {
		const opened = openCapture(sampleCapture(path).map(handleOf));
		if (!opened.ok || opened.value.kind !== 'waveform') throw new Error('not read');
		expect(opened.value.samples.kind).toBe('rows');
		expect(loadSamples(opened.value)).toEqual(read(path));
	});

	it('the three forms of one recording agree within half a step and one step of full scale', () => {
		const [reference, ...others] = ['float32_stereo', 'pcm16_stereo', 'pcm24_extensible'].map((form) =>
			read(`derived/wav/plugload_398_${form}.wav`)
		);
		for (const [which, other] of others.entries()) {
			// Their writer took 2^15 − 1 (2^23 − 1) for full scale, the reader takes 2^15 (2^23), as most do: 3e-5 of a value.
			const step = 2 ** -[15, 23][which]!;
			for (const [c, channel] of reference!.channels.entries())
				for (const [i, value] of channel.samples.entries()) {
					const off = Math.abs(other.channels[c]!.samples[i]! - value);
					expect(off).toBeLessThanOrEqual(step * (0.5 + Math.abs(value)) + 2 ** -25);
				}
		}
	});

	it.each(all.filter(([path]) => path.includes('400hz')))(
		'%s: frequency every ten seconds, and no order above 3',
		(path, file) => {
			const recording = read(path);
			const mapping = [{ channelIndex: 0, quantity: 'voltage', phase: 'L1', toPrimary: 32_768 } as const];
			const spans: WaveformWindows[] = [];
			const opened = openCapture(sampleCapture(path).map(handleOf));
			if (!opened.ok || opened.value.kind !== 'waveform') throw new Error('not read');
			const steps = analyseCapture(opened.value, mapping, { nominalFrequency_Hz: 50 }, (s) => spans.push(s));
			let step = steps.next();
			while (!step.done) step = steps.next();
			if (!step.value.ok) throw new Error(step.value.problem.sentence);
			expect(step.value.value.highestOrder).toBe(3);
			expect(step.value.value.quality.map(({ code }) => code)).toContain('rate-too-low');
			const { windowStarts_s, frequency_Hz } = joinSpans(spans);
			for (const [index, expected] of (file.f1_hz_per_10s ?? []).entries()) {
				const inside = [...frequency_Hz].filter(
					(_, w) => windowStarts_s[w]! >= 10 * index && windowStarts_s[w]! < 10 * (index + 1)
				);
				const mean = inside.reduce((sum, f) => sum + f, 0) / inside.length;
				// Mean of the windows against one line over the ten seconds: they weigh a moving frequency differently.
				expect(Math.abs(mean - expected)).toBeLessThan(0.005);
			}
			expect(captureFacts(opened.value, 50).highestOrder).toBe(3);
			expect(analyseWaveform(recording, mapping, { nominalFrequency_Hz: 50 }).ok).toBe(true);
		}
	);
});
