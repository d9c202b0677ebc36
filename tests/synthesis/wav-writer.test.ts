import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readCapture } from '$lib/recording/read-capture';
import type { Recording } from '$lib/recording/recording';
import {
	WAV_HALF_STEP,
	writeWav,
	type WavSamples,
	type WavToWrite,
	type WavWriteOptions
} from '$lib/synthesis/wav-writer';
import { PINNED_SEED } from './waveform-arbitrary';

const WIDTHS: WavSamples[] = ['uint8', 'int16', 'int24', 'int32', 'float32', 'float64'];

const waveArbitrary: fc.Arbitrary<WavToWrite> = fc
	.record({
		samplingRate_Hz: fc.constantFrom(400, 7_680, 44_100, 192_000),
		channelCount: fc.integer({ min: 1, max: 9 }),
		sampleCount: fc.integer({ min: 1, max: 50 })
	})
	.chain(({ samplingRate_Hz, channelCount, sampleCount }) =>
		fc
			.array(
				fc.array(fc.integer({ min: -1_000_000, max: 999_999 }), {
					minLength: sampleCount,
					maxLength: sampleCount
				}),
				{ minLength: channelCount, maxLength: channelCount }
			)
			.map((channels) => ({
				samplingRate_Hz,
				channels: channels.map((values) => Float64Array.from(values, (value) => value / 1e6))
			}))
	);

const variantArbitrary: fc.Arbitrary<Omit<WavWriteOptions, 'stem' | 'samples'>> = fc.record({
	form: fc.constantFrom('RIFF' as const, 'RF64' as const, 'BW64' as const),
	extensible: fc.boolean(),
	strangeChunks: fc.boolean(),
	openSize: fc.constantFrom(undefined, 'zero' as const, 'all ones' as const)
});

function readBack(wave: WavToWrite, options: WavWriteOptions): Recording {
	const result = readCapture([writeWav(wave, options)]);
	if (!result.ok || result.value.kind !== 'waveform')
		throw new Error(result.ok ? 'no waveform' : result.problem.sentence);
	return result.value;
}

describe('WAV written and read again', () => {
	it.each(WIDTHS)('%s, in every form that the writer knows', (samples) => {
		fc.assert(
			fc.property(waveArbitrary, variantArbitrary, (wave, variant) => {
				const recording = readBack(wave, { ...variant, samples, stem: 'wave' });
				expect(recording.format).toBe('WAV');
				expect(recording.sampleCount).toBe(wave.channels[0]!.length);
				expect(recording.segments).toEqual([
					{ samplingRate_Hz: wave.samplingRate_Hz, fromSample: 0, toSample: recording.sampleCount }
				]);
				expect(recording.channels.length).toBe(wave.channels.length);
				// Integers end one step below +1, so the topmost half step is clipped to it.
				const tolerance = (samples.startsWith('float') ? 1 : 2) * WAV_HALF_STEP[samples];
				for (const [c, written] of wave.channels.entries())
					for (const [i, value] of written.entries())
						expect(Math.abs(recording.channels[c]!.samples[i]! - value)).toBeLessThanOrEqual(tolerance);
				const isOpen = recording.remarks.some(({ code }) => code === 'wav-size-open');
				expect(isOpen).toBe(variant.openSize !== undefined);
				expect(recording.remarks.some(({ code }) => code === 'wav-truncated')).toBe(false);
			}),
			{ seed: PINNED_SEED, numRuns: 60 }
		);
	});

	it('keeps what the recorder tells in texts, and its start', () => {
		const recording = readBack(
			{ samplingRate_Hz: 8000, channels: [Float64Array.of(0.5, -0.5)] },
			{
				stem: 'told',
				samples: 'int16',
				info: { ICMT: 'Left clamp on L2', IXYZ: 'ignored' },
				broadcast: {
					description: 'Pump room',
					originator: 'Recorder 4',
					local: '2026-03-10T09:30:00.250000'
				}
			}
		);
		expect(recording.start).toEqual({ local: '2026-03-10T09:30:00.250000', utcOffset_min: null });
		expect(recording.recorderName).toBe('Recorder 4');
		expect(recording.notes?.map(({ text }) => text)).toEqual(['Pump room', 'Comment: Left clamp on L2']);
	});
});
