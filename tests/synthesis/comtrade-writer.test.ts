import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readComtrade } from '$lib/recording/readers/comtrade/read-comtrade';
import type { Recording, RecordingChannel } from '$lib/recording/recording';
import { writeComtrade } from '$lib/synthesis/comtrade-writer';
import type {
	ComtradeWriteOptions,
	WaveformChannelToWrite,
	WaveformToWrite
} from '$lib/synthesis/comtrade-writer-header';
import { PINNED_SEED, waveformArbitrary } from './waveform-arbitrary';

const VARIANTS: Omit<ComtradeWriteOptions, 'stem'>[] = [
	{ revision: '1999', dataFormat: 'ASCII' },
	{ revision: '1999', dataFormat: 'BINARY' },
	...(['ASCII', 'BINARY', 'BINARY32', 'FLOAT32'] as const).flatMap((dataFormat) => [
		{ revision: '2013' as const, dataFormat },
		{ revision: '2013' as const, dataFormat, combined: true }
	])
];

/** Half a quantisation step of the data format, relative to the largest sample; float32 keeps 24 bits. */
const HALF_STEP = {
	ASCII: 0.5 / 99_998,
	BINARY: 0.5 / 32_767,
	BINARY32: 0.5 / 2_147_483_647,
	FLOAT32: 2 ** -24
};

function readBack(waveform: WaveformToWrite, options: ComtradeWriteOptions): Recording {
	const result = readComtrade(writeComtrade(waveform, options));
	if (!result.ok) throw new Error(result.problem.sentence);
	return result.value;
}

function largest(samples: Float64Array): number {
	return samples.reduce((max, sample) => (Math.abs(sample) > max ? Math.abs(sample) : max), 0);
}

function expectChannel(ours: RecordingChannel, written: WaveformChannelToWrite, halfStep: number): void {
	expect(ours).toMatchObject({
		name: written.name,
		unitAsWritten: written.unitAsWritten,
		phaseHint: written.phaseHint,
		valuesAre: written.valuesAre,
		ratio: written.ratio
	});
	const tolerance = (halfStep + 1e-14) * largest(written.samples);
	for (const [index, sample] of written.samples.entries()) {
		const read = ours.samples[index] as number;
		if (Number.isNaN(sample)) expect(read).toBeNaN();
		else expect(Math.abs(read - sample)).toBeLessThanOrEqual(tolerance);
	}
}

describe('COMTRADE written and read again', () => {
	it.each(VARIANTS)('$revision $dataFormat, combined: $combined', (variant) => {
		fc.assert(
			fc.property(waveformArbitrary, (waveform) => {
				const recording = readBack(waveform, { ...variant, stem: 'capture' });
				expect(recording.variant).toBe(`${variant.revision} ${variant.dataFormat}`);
				expect(recording).toMatchObject({
					stationName: waveform.stationName,
					recorderName: waveform.recorderName,
					nominalFrequency_Hz: 60,
					sampleCount: waveform.sampleCount,
					segments: waveform.segments,
					statusChannelNames: waveform.statusChannelNames
				});
				expect(recording.start).toEqual({
					local: waveform.start.local,
					utcOffset_min: variant.revision === '2013' ? waveform.start.utcOffset_min : null
				});
				for (const [index, written] of waveform.channels.entries())
					expectChannel(
						recording.channels[index] as RecordingChannel,
						written,
						HALF_STEP[variant.dataFormat]
					);
				const codes = recording.remarks.map(({ code }) => code);
				expect(codes.filter((code) => code !== 'missing-samples')).toEqual([]);
			}),
			{ seed: PINNED_SEED, numRuns: 60 }
		);
	});
});

const sine = (sampleCount: number, rate_Hz: number): WaveformToWrite => ({
	stationName: 'Kestrel Row',
	recorderName: 'Recorder 2',
	nominalFrequency_Hz: 50,
	start: { local: '2024-03-05T10:20:30.123456789', utcOffset_min: 60 },
	sampleCount,
	segments: [{ samplingRate_Hz: rate_Hz, fromSample: 0, toSample: sampleCount }],
	channels: [
		{
			name: 'U_L1, bus A',
			unitAsWritten: 'V',
			samples: Float64Array.from(
				{ length: sampleCount },
				(_, n) => 325 * Math.sin((2 * Math.PI * 50 * n) / rate_Hz)
			)
		}
	]
});

describe('what the writer has to keep apart', () => {
	it('keeps nanoseconds of the start, and stamps that agree with the rate', () => {
		const recording = readBack(sine(500, 12_800), { revision: '2013', dataFormat: 'BINARY', stem: 'x' });
		expect(recording.start?.local).toBe('2024-03-05T10:20:30.123456789');
		expect(recording.remarks).toEqual([]);
	});

	it('writes a comma inside a name as a blank', () => {
		const recording = readBack(sine(20, 12_800), { revision: '1999', dataFormat: 'ASCII', stem: 'x' });
		expect(recording.channels[0]?.name).toBe('U_L1  bus A');
	});

	it('clips at a stated range, and the reader tells the range', () => {
		const waveform = sine(256, 12_800);
		const channels = waveform.channels.map((channel) => ({ ...channel, range: { min: -300, max: 300 } }));
		const recording = readBack(
			{ ...waveform, channels },
			{ revision: '1999', dataFormat: 'BINARY', stem: 'x' }
		);
		const channel = recording.channels[0] as RecordingChannel;
		expect(largest(channel.samples)).toBeCloseTo(300, 9);
		expect(channel.range?.max).toBeCloseTo(300, 9);
	});

	it('writes a gap between segments so that the reader finds it', () => {
		const waveform = sine(400, 10_000);
		waveform.segments = [
			{ samplingRate_Hz: 10_000, fromSample: 0, toSample: 200 },
			{ samplingRate_Hz: 10_000, fromSample: 200, toSample: 400, gapBefore_s: 1.5 }
		];
		const recording = readBack(waveform, { revision: '1999', dataFormat: 'BINARY', stem: 'x' });
		expect(recording.segments[1]?.gapBefore_s).toBeCloseTo(1.5, 6);
	});

	it('writes uneven stamps with a rate count of 0', () => {
		const waveform = {
			...sine(4, 1000),
			segments: [],
			timeStamps_s: Float64Array.of(0, 0.001, 0.003, 0.004)
		};
		const recording = readBack(waveform, { revision: '1999', dataFormat: 'ASCII', stem: 'x' });
		expect([...(recording.timeStamps_s ?? [])]).toEqual([0, 0.001, 0.003, 0.004]);
	});

	it('makes a rate of even stamps where none is stated', () => {
		const timeStamps_s = Float64Array.from({ length: 100 }, (_, n) => n / 15_360);
		const recording = readBack(
			{ ...sine(100, 15_360), segments: [], timeStamps_s },
			{ revision: '1999', dataFormat: 'ASCII', stem: 'x' }
		);
		// 99 steps between stamps rounded to 1 µs: the rate is known to 1 µs in 6.45 ms.
		expect(Math.abs((recording.segments[0]?.samplingRate_Hz ?? NaN) / 15_360 - 1)).toBeLessThan(1.6e-4);
		expect(recording.remarks.map(({ code }) => code)).toEqual(['rate-from-stamps']);
	});

	it('widens the time multiplier where the stamps would not fit', () => {
		const waveform = sine(10, 1 / 1000);
		waveform.start.local = '2024-03-05T10:20:30.000000';
		const recording = readBack(waveform, { revision: '1999', dataFormat: 'BINARY', stem: 'x' });
		expect(recording.remarks).toEqual([]);
	});
});
